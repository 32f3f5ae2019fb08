import { Readable } from 'node:stream';
import { buffer } from 'node:stream/consumers';
import { bytesOf, engineVersion, planHash, type Plan, type RecordingSource } from '$engine';
import type { Member } from '$lib/server/access';
import type { Db } from '$lib/server/database';
import { recordingFacts } from '$lib/server/recordings';
import { createRun, storeResult } from '$lib/server/runs';
import { runHeadless, type HeadlessResult } from '$workers/headless';
import { smallPlan, smallRecording } from '../../engine/run/small-run';
import { openLab, type Lab } from '../recordings/lab';

export interface RunLab extends Lab {
  contrastId: string;
  plan: Plan;
  hash: string;
  recordings: RecordingSource[];
  /** Computes the plan in this process; made once, since it is the same each time. */
  compute(): Promise<HeadlessResult>;
  /** A new run row of the plan. */
  begin(): Promise<string>;
  /** Stores a result, by default the right one. */
  store(runId: string, result?: HeadlessResult): Promise<void>;
}

/** A team with one recording and a locked plan over it. */
export async function openRunLab(db: Db): Promise<RunLab> {
  const lab = await openLab(db);
  const ingested = await lab.ingest(smallRecording());
  if (ingested.kind !== 'stored') throw new Error(`the recording was not stored: ${ingested.kind}`);
  const { sha256, storageKey } = await db
    .selectFrom('recording')
    .select(['sha256', 'storageKey'])
    .where('id', '=', ingested.id)
    .executeTakeFirstOrThrow();
  const [facts] = await recordingFacts(db, lab.member.teamId, { ids: [ingested.id] });
  const source = bytesOf(new Uint8Array(await buffer(lab.storage.stream(storageKey))));
  const plan = smallPlan(sha256);
  const { contrastId, hash } = await lockedContrast(db, lab.member, lab.studyId, plan);
  const recordings = [{ facts: facts!, source }];
  let computed: Promise<HeadlessResult> | null = null;
  const compute = () => (computed ??= runHeadless(plan, recordings));
  return {
    ...lab,
    contrastId,
    plan,
    hash,
    recordings,
    compute,
    async begin() {
      const asked = { planHash: hash, engineVersion, workerCount: 1 };
      return (await createRun(db, lab.member, contrastId, asked)).id;
    },
    async store(runId, result) {
      const given = result ?? (await compute());
      await storeResult(db, lab.storage, lab.member, runId, given, given.summary);
    },
  };
}

/** A contrast whose first plan is locked. */
export async function lockedContrast(db: Db, member: Member, studyId: string, plan: Plan) {
  const owner = { teamId: member.teamId, createdBy: member.personId };
  const contrast = await db
    .insertInto('contrast')
    .values({ ...owner, studyId, name: 'First against second half' })
    .returning('id')
    .executeTakeFirstOrThrow();
  const hash = await planHash(plan);
  await db
    .insertInto('plan')
    .values({
      ...owner,
      contrastId: contrast.id,
      version: 1,
      body: JSON.stringify(plan),
      hash,
      lockedAt: new Date(),
      lockedBy: member.personId,
    })
    .execute();
  return { contrastId: contrast.id, hash };
}

export const stream = (bytes: Uint8Array): Readable =>
  Readable.from([Buffer.from(bytes)], { objectMode: false });
