import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { availableParallelism, tmpdir } from 'node:os';
import path from 'node:path';
import { engineVersion, planHash, writeEdf, type Plan } from '$engine';
import { planToDraft } from '$lib/model/plan-draft';
import type { Member } from '$lib/server/access';
import { createPerson } from '$lib/server/accounts/people';
import { hashPassword } from '$lib/server/accounts/passwords';
import { createContrast, lockPlan, saveDraft } from '$lib/server/contrasts';
import { db, type Db } from '$lib/server/database';
import { ingestRecording, recordingFacts } from '$lib/server/recordings';
import { createRun, storeResult } from '$lib/server/runs';
import { storage } from '$lib/server/storage';
import { createStudy } from '$lib/server/studies';
import { withPhaseBytes } from '$workers/headless';
import { poolSize } from '$workers/run/pool';
import { threadPool } from '$workers/run/thread-pool';
import { wholeRun } from '$workers/run/whole-run';
import { demoAccounts, demoPassword, demoTeam } from './accounts.mjs';
import { finishedPlan, readyPlan } from './plans';
import { rateHz, simulate, sites, type Participant } from './simulate';

const participants: Participant[] = [
  { code: 'P01', seed: 'tidewater/P01', couplingUv: 6.5 },
  { code: 'P02', seed: 'tidewater/P02', couplingUv: 7 },
  // Nothing is planted here: a contrast of this participant should find nothing.
  { code: 'P03', seed: 'tidewater/P03', couplingUv: 0 },
];

interface Kept {
  sha256: string;
  name: string;
  bytes: Uint8Array;
}

/**
 * Makes the invented laboratory: its people, a study of simulated recordings, a contrast that has
 * been run and one that waits. Each step asks first what stands, so that a start that was killed
 * half-way is finished by the next. `thread` is the bundled workers/engine-thread.ts.
 */
export async function seedDemo(say: (line: string) => void, thread: URL): Promise<void> {
  try {
    if (await demoStands()) return;
    say('seeding the demo (simulated recordings, one finished run)');
    const researcher = await seedPeople();
    const studyId = await seedStudy(researcher);
    const recordings = new Map<string, Kept>();
    for (const participant of participants) {
      recordings.set(participant.code, await seedRecording(researcher, studyId, participant));
    }
    const first = recordings.get('P01')!;
    const second = recordings.get('P02')!;
    await seedContrast(researcher, { studyId, name: 'Every pair, P01', plan: readyPlan(first) });
    const plan = finishedPlan(second);
    const contrastId = await seedContrast(researcher, { studyId, name: finishedName, plan });
    await seedRun(researcher, { studyId, contrastId, plan, recording: second }, thread);
  } finally {
    await db.destroy();
  }
}

const finishedName = 'Cued against free tapping';

/** The finished run is the seed's last step. */
async function demoStands(): Promise<boolean> {
  const run = await db
    .selectFrom('run')
    .innerJoin('team', 'team.id', 'run.teamId')
    .select('run.id')
    .where('team.name', '=', demoTeam)
    .where('run.state', '=', 'finished')
    .executeTakeFirst();
  return run !== undefined;
}

/** The demo's people and team; answers the researcher, who makes everything else. */
async function seedPeople(): Promise<Member> {
  const passwordHash = await hashPassword(demoPassword);
  return db.transaction().execute(async (trx) => {
    const known = await trx
      .selectFrom('team')
      .select('id')
      .where('name', '=', demoTeam)
      .executeTakeFirst();
    const teamId = known?.id ?? (await insertTeam(trx, passwordHash));
    const person = await trx
      .selectFrom('member')
      .innerJoin('person', 'person.id', 'member.personId')
      .select(['person.id', 'person.name'])
      .where('member.teamId', '=', teamId)
      .where('member.role', '=', 'researcher')
      .executeTakeFirstOrThrow();
    return {
      personId: person.id,
      personName: person.name,
      teamId,
      teamName: demoTeam,
      teamSimulated: true,
      role: 'researcher',
    };
  });
}

async function insertTeam(trx: Db, passwordHash: string): Promise<string> {
  const team = await trx
    .insertInto('team')
    .values({ name: demoTeam, simulated: true })
    .returning('id')
    .executeTakeFirstOrThrow();
  for (const { email, name, role } of demoAccounts) {
    const personId = await createPerson(trx, { email, name, passwordHash });
    await trx.insertInto('member').values({ teamId: team.id, personId, role }).execute();
  }
  return team.id;
}

async function seedStudy(member: Member): Promise<string> {
  const name = 'Paced tapping';
  const known = await db
    .selectFrom('study')
    .select('id')
    .where('teamId', '=', member.teamId)
    .where('name', '=', name)
    .executeTakeFirst();
  if (known) return known.id;
  const study = await createStudy(db, member, {
    name,
    description:
      'Simulated. Taps to a beat that is given (cued) against taps to a beat kept from memory (free).',
    simulated: true,
  });
  if (!study.ok) throw new Error(study.message);
  return study.id;
}

async function seedRecording(
  member: Member,
  studyId: string,
  participant: Participant,
): Promise<Kept> {
  const recording = simulate(participant);
  const bytes = writeEdf({
    startedAt: '2026-03-02T10:00:00',
    recordDurationS: 1,
    signals: sites.map((label, i) => ({
      label,
      unit: 'uV',
      physicalMin: -500,
      physicalMax: 500,
      samplesPerRecord: rateHz,
      samples: recording.samples[i],
    })),
    annotations: recording.events.map(({ onsetS, label }) => ({ onsetS, text: label })),
  });
  const name = `${participant.code} tapping (simulated).edf`;
  const folder = await mkdtemp(path.join(tmpdir(), 'nullwright-demo-'));
  try {
    const file = path.join(folder, 'recording.edf');
    await writeFile(file, bytes);
    const stored = await ingestRecording(db, storage, member, {
      studyId,
      participantCode: participant.code,
      name,
      path: file,
      keepIdentification: false,
      simulated: true,
    });
    // What is stored is what was written: nothing in its header identifies anybody.
    const { sha256 } = await db
      .selectFrom('recording')
      .select('sha256')
      .where('teamId', '=', member.teamId)
      .where('id', '=', stored.id)
      .executeTakeFirstOrThrow();
    return { sha256, name, bytes };
  } finally {
    await rm(folder, { recursive: true });
  }
}

async function seedContrast(
  member: Member,
  { studyId, name, plan }: { studyId: string; name: string; plan: Plan },
): Promise<string> {
  const known = await db
    .selectFrom('contrast')
    .select('id')
    .where('studyId', '=', studyId)
    .where('name', '=', name)
    .executeTakeFirst();
  const contrastId = known?.id ?? (await made(member, { studyId, name, question: plan.question }));
  const row = await db
    .selectFrom('plan')
    .select(['revision', 'lockedAt'])
    .where('contrastId', '=', contrastId)
    .executeTakeFirstOrThrow();
  if (row.lockedAt) return contrastId;
  const draft = planToDraft(plan);
  const basedOn = row.revision;
  const saved = await saveDraft(db, member, contrastId, { version: 1, basedOn, draft });
  if (saved.state !== 'saved') throw new Error(`${name}: the draft was not saved`);
  const { revision } = saved;
  const locked = await lockPlan(db, member, contrastId, { version: 1, revision, reason: '' });
  if (locked.state !== 'locked') throw new Error(`${name}: ${JSON.stringify(locked)}`);
  return contrastId;
}

async function made(
  member: Member,
  contrast: { studyId: string; name: string; question: string },
): Promise<string> {
  const result = await createContrast(db, member, contrast);
  if (!result.ok) throw new Error(result.message);
  return result.id;
}

async function seedRun(
  member: Member,
  run: { studyId: string; contrastId: string; plan: Plan; recording: Kept },
  thread: URL,
): Promise<void> {
  const { plan } = run;
  const { sha256, bytes } = run.recording;
  const [facts] = await recordingFacts(db, member.teamId, {
    studyId: run.studyId,
    sha256s: [sha256],
  });
  const pool = threadPool(poolSize(null, availableParallelism()), thread);
  try {
    const asked = { planHash: await planHash(plan), engineVersion, workerCount: pool.size };
    const { id } = await createRun(db, member, run.contrastId, asked);
    const recordings = [{ facts: facts!, blob: new Blob([new Uint8Array(bytes)]) }];
    const result = await withPhaseBytes(pool, plan, await wholeRun(pool, plan, recordings));
    await storeResult(db, storage, member, id, result, result.summary);
  } finally {
    pool.end();
  }
}
