import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Member } from '../access';
import type { Db } from '../database';
import { lockedUse } from './locked-use';

/** The study's participant with this code, made where there is none yet. */
export async function participantWith(
  trx: Db,
  teamId: string,
  { studyId, code }: { studyId: string; code: string },
): Promise<string> {
  await trx
    .insertInto('participant')
    .values({ teamId, studyId, code })
    .onConflict((conflict) => conflict.constraint('participant_study_code_key').doNothing())
    .execute();
  const { id } = await trx
    .selectFrom('participant')
    .select('id')
    .where('teamId', '=', teamId)
    .where('studyId', '=', studyId)
    .where('code', '=', code)
    .executeTakeFirstOrThrow();
  return id;
}

export type Assigned = { ok: true } | { ok: false; message: string };

/** Gives a recording to another participant, unless a locked plan names it under this one. */
export async function assignParticipant(
  db: Db,
  member: Member,
  recordingId: string,
  code: string,
): Promise<Assigned> {
  return db.transaction().execute(async (trx) => {
    const recording = await trx
      .selectFrom('recording')
      .select(['studyId', 'sha256', 'name'])
      .where('teamId', '=', member.teamId)
      .where('id', '=', recordingId)
      .forUpdate()
      .executeTakeFirst();
    if (!recording) notFound('recording');
    const locked = await lockedUse(trx, member.teamId, recording);
    if (locked.length > 0) {
      const message =
        `${recording.name} keeps its participant: locked plans name it ` +
        `(${locked.join(', ')}).`;
      return { ok: false, message };
    }
    const { studyId } = recording;
    const participantId = await participantWith(trx, member.teamId, { studyId, code });
    await trx
      .updateTable('recording')
      .set({ participantId })
      .where('teamId', '=', member.teamId)
      .where('id', '=', recordingId)
      .execute();
    const subject = { type: 'recording', id: recordingId };
    await record(trx, member, 'recording.participant-changed', subject, { participant: code });
    return { ok: true };
  });
}
