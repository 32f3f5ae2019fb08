import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { bytesOf, engineVersion, writeEdf, type Plan } from '$engine';
import { planToDraft } from '$lib/model/plan-draft';
import type { Role } from '$lib/model/role';
import type { Member } from '$lib/server/access';
import { createPerson } from '$lib/server/accounts/people';
import { hashPassword } from '$lib/server/accounts/passwords';
import { createContrast, lockPlan, saveDraft } from '$lib/server/contrasts';
import { db } from '$lib/server/database';
import { ingestRecording, recordingFacts } from '$lib/server/recordings';
import { createRun, storeResult } from '$lib/server/runs';
import { storage } from '$lib/server/storage';
import { createStudy } from '$lib/server/studies';
import { runHeadless } from '$workers/headless';
import { demoAccounts, demoPassword, demoTeam } from './accounts.mjs';
import { finishedPlan, readyPlan } from './plans';
import { rateHz, simulate, sites, type Participant } from './simulate';

const participants: Participant[] = [
  { code: 'P01', seed: 'tidewater/P01', couplingUv: 14 },
  { code: 'P02', seed: 'tidewater/P02', couplingUv: 16 },
  // Nothing is planted here: a contrast of this participant should find nothing.
  { code: 'P03', seed: 'tidewater/P03', couplingUv: 0 },
];

interface Kept {
  sha256: string;
  name: string;
  bytes: Uint8Array;
}

/**
 * Fills an empty database with the invented laboratory: its people, a study of simulated
 * recordings, a contrast that has been run and one that waits. Does nothing where it stands.
 */
export async function seedDemo(say: (line: string) => void): Promise<void> {
  try {
    const known = await db.selectFrom('team').select('id').where('name', '=', demoTeam).execute();
    if (known.length > 0) return;
    say('seeding the demo (simulated recordings, one finished run)');
    const members = await seedPeople();
    const researcher = members.researcher;
    const studyId = await seedStudy(researcher);
    const recordings = new Map<string, Kept>();
    for (const participant of participants) {
      recordings.set(participant.code, await seedRecording(researcher, studyId, participant));
    }
    const first = recordings.get('P01')!;
    const second = recordings.get('P02')!;
    await seedContrast(researcher, studyId, 'Every pair, P01', readyPlan(first));
    const plan = finishedPlan(second);
    const done = await seedContrast(researcher, studyId, 'Cued against free tapping', plan);
    await seedRun(researcher, { studyId, ...done, plan, recording: second });
  } finally {
    await db.destroy();
  }
}

async function seedPeople(): Promise<Record<Role, Member>> {
  const passwordHash = await hashPassword(demoPassword);
  return db.transaction().execute(async (trx) => {
    const team = await trx
      .insertInto('team')
      .values({ name: demoTeam, simulated: true })
      .returning('id')
      .executeTakeFirstOrThrow();
    const members: Partial<Record<Role, Member>> = {};
    for (const account of demoAccounts) {
      const { email, name } = account;
      const role = account.role as Role;
      const personId = await createPerson(trx, { email, name, passwordHash });
      await trx.insertInto('member').values({ teamId: team.id, personId, role }).execute();
      members[role] = {
        personId,
        personName: name,
        teamId: team.id,
        teamName: demoTeam,
        teamSimulated: true,
        role,
      };
    }
    return members as Record<Role, Member>;
  });
}

async function seedStudy(member: Member): Promise<string> {
  const study = await createStudy(db, member, {
    name: 'Paced tapping',
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
    if (stored.kind !== 'stored') throw new Error(`${name} is in the database already`);
    return { sha256: stored.sha256, name, bytes };
  } finally {
    await rm(folder, { recursive: true });
  }
}

async function seedContrast(member: Member, studyId: string, name: string, plan: Plan) {
  const contrast = await createContrast(db, member, { studyId, name, question: plan.question });
  if (!contrast.ok) throw new Error(contrast.message);
  const draft = planToDraft(plan);
  const saved = await saveDraft(db, member, contrast.id, { version: 1, basedOn: 1, draft });
  if (saved.state !== 'saved') throw new Error(`${name}: the draft was not saved`);
  const { revision } = saved;
  const locked = await lockPlan(db, member, contrast.id, { version: 1, revision, reason: '' });
  if (locked.state !== 'locked') {
    throw new Error(`${name}: the plan was not locked: ${JSON.stringify(locked)}`);
  }
  return { contrastId: contrast.id, planHash: locked.hash };
}

async function seedRun(
  member: Member,
  run: { studyId: string; contrastId: string; planHash: string; plan: Plan; recording: Kept },
): Promise<void> {
  const { sha256, bytes } = run.recording;
  const [facts] = await recordingFacts(db, member.teamId, {
    studyId: run.studyId,
    sha256s: [sha256],
  });
  const asked = { planHash: run.planHash, engineVersion, workerCount: 1 };
  const { id } = await createRun(db, member, run.contrastId, asked);
  const result = await runHeadless(run.plan, [{ facts, source: bytesOf(bytes) }]);
  await storeResult(db, storage, member, id, result, result.summary);
}
