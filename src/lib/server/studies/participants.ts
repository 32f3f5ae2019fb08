import { sql } from 'kysely';
import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Member } from '../access';
import type { Db } from '../database';
import { getStudy } from './studies';

export interface ListedParticipant {
  id: string;
  code: string;
  recordingCount: number;
}

export async function listParticipants(
  db: Db,
  teamId: string,
  studyId: string,
): Promise<ListedParticipant[]> {
  return db
    .selectFrom('participant')
    .select(['id', 'code'])
    .select(
      sql<number>`(select count(*) from recording where participant_id = participant.id)`.as(
        'recordingCount',
      ),
    )
    .where('teamId', '=', teamId)
    .where('studyId', '=', studyId)
    .orderBy('code')
    .execute();
}

/** Adds the codes that the study does not have yet; answers how many those were. */
export async function addParticipants(
  db: Db,
  member: Member,
  studyId: string,
  codes: string[],
): Promise<number> {
  await getStudy(db, member.teamId, studyId);
  if (codes.length === 0) return 0;
  return db.transaction().execute(async (trx) => {
    const added = await trx
      .insertInto('participant')
      .values(codes.map((code) => ({ teamId: member.teamId, studyId, code })))
      .onConflict((conflict) => conflict.constraint('participant_study_code_key').doNothing())
      .returning('code')
      .execute();
    if (added.length > 0) {
      const detail = { codes: added.map((row) => row.code) };
      await record(trx, member, 'participant.added', { type: 'study', id: studyId }, detail);
    }
    return added.length;
  });
}

export type RemovedParticipant = { ok: true; code: string } | { ok: false; message: string };

/** Removes a participant without recordings. */
export async function removeParticipant(
  db: Db,
  member: Member,
  studyId: string,
  participantId: string,
): Promise<RemovedParticipant> {
  const participant = (await listParticipants(db, member.teamId, studyId)).find(
    (listed) => listed.id === participantId,
  );
  if (!participant) notFound('participant');
  if (participant.recordingCount > 0) {
    const message = `${participant.code} has recordings. Delete those first.`;
    return { ok: false, message };
  }
  await db.transaction().execute(async (trx) => {
    await trx
      .deleteFrom('participant')
      .where('teamId', '=', member.teamId)
      .where('id', '=', participantId)
      .execute();
    const detail = { code: participant.code };
    await record(trx, member, 'participant.removed', { type: 'study', id: studyId }, detail);
  });
  return { ok: true, code: participant.code };
}
