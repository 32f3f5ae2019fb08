import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Member } from '../access';
import type { Db } from '../database';
import type { Storage } from '../storage';
import { lockedUse } from './locked-use';

export type RemovedRecording =
  { ok: true; name: string } | { ok: false; name: string; lockedContrasts: string[] };

/** Deletes a recording and its file, unless a locked plan names its hash. */
export async function removeRecording(
  db: Db,
  storage: Storage,
  member: Member,
  recordingId: string,
): Promise<RemovedRecording> {
  const outcome = await db.transaction().execute(async (trx) => {
    const recording = await trx
      .selectFrom('recording')
      .select(['studyId', 'name', 'sha256', 'storageKey'])
      .where('teamId', '=', member.teamId)
      .where('id', '=', recordingId)
      .forUpdate()
      .executeTakeFirst();
    if (!recording) notFound('recording');
    const { name, storageKey } = recording;
    const lockedContrasts = await lockedUse(trx, member.teamId, recording);
    if (lockedContrasts.length > 0) return { ok: false as const, name, lockedContrasts };
    await trx
      .deleteFrom('recording')
      .where('teamId', '=', member.teamId)
      .where('id', '=', recordingId)
      .execute();
    const detail = { name, sha256: recording.sha256 };
    await record(trx, member, 'recording.deleted', { type: 'recording', id: recordingId }, detail);
    return { ok: true as const, name, storageKey };
  });
  if (!outcome.ok) return outcome;
  await storage.remove(outcome.storageKey);
  return { ok: true, name: outcome.name };
}
