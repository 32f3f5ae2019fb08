import { randomUUID } from 'node:crypto';
import pg from 'pg';
import { planHash, type Plan } from '../../workers/engine';

/** A contrast with a locked plan over a recording of the demo, small enough to be run in seconds. */
export async function lockedContrast(
  databaseUrl: string,
  size: { sites: string[]; permutations: number },
): Promise<{ contrastId: string; hash: string }> {
  const client = new pg.Client({ connectionString: databaseUrl });
  await client.connect();
  try {
    const { rows } = await client.query<DemoRecording>(
      `select recording.team_id, recording.study_id, recording.sha256, recording.name,
              recording.uploaded_by, participant.code
         from recording join participant on participant.id = recording.participant_id
        where recording.simulated and participant.code = 'P01'`,
    );
    const [recording] = rows;
    if (!recording) throw new Error('the demo holds no recording of P01: was it seeded?');
    const plan = planOver(recording, size);
    const hash = await planHash(plan);
    const contrast = await client.query<{ id: string }>(
      `insert into contrast (team_id, study_id, name, created_by) values ($1, $2, $3, $4)
       returning id`,
      [recording.team_id, recording.study_id, `Test ${randomUUID()}`, recording.uploaded_by],
    );
    const contrastId = contrast.rows[0]!.id;
    await client.query(
      `insert into plan (team_id, contrast_id, version, body, hash, locked_at, locked_by, created_by)
       values ($1, $2, 1, $3, $4, now(), $5, $5)`,
      [recording.team_id, contrastId, JSON.stringify(plan), hash, recording.uploaded_by],
    );
    return { contrastId, hash };
  } finally {
    await client.end();
  }
}

interface DemoRecording {
  team_id: string;
  study_id: string;
  sha256: string;
  name: string;
  uploaded_by: string;
  code: string;
}

function planOver(
  { sha256, name, code }: DemoRecording,
  { sites, permutations }: { sites: string[]; permutations: number },
): Plan {
  const even = (fromS: number, toS: number) => [
    { kind: 'even' as const, recording: sha256, fromS, toS, everyS: 1 },
  ];
  return {
    format: 'nullwright-plan/1',
    question: 'Do the first half minute and the second differ?',
    participant: code,
    recordings: [{ sha256, name }],
    a: { name: 'first', rules: even(2, 30) },
    b: { name: 'second', rules: even(32, 60) },
    epoch: {
      fromS: 0,
      toS: 0.8,
      detrend: 'mean',
      reference: { kind: 'recorded' },
      reject: { aboveUv: null, flatBelowUv: null, byHand: [] },
    },
    sites,
    pairs: { kind: 'all' },
    phase: {
      method: 'morlet',
      frequencies: { kind: 'list', hz: [8, 10, 13] },
      cycles: { from: 4, to: 5 },
    },
    times: { fromS: 0, toS: 0.8, stepS: 0.2 },
    measure: 'ispc',
    null: 'labels',
    test: {
      tail: 'two-sided',
      alpha: 0.05,
      permutations,
      corrections: ['max-statistic', 'cluster-mass'],
      clusterFormingZ: 2,
      seed: 'ebb-7',
    },
  };
}
