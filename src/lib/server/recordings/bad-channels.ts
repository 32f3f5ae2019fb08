import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Member } from '../access';
import type { Db } from '../database';

/** Marks a channel bad or good again; plans leave bad channels out unless they name them. */
export async function markChannel(
  db: Db,
  member: Member,
  recordingId: string,
  { site, bad }: { site: string; bad: boolean },
): Promise<void> {
  await db.transaction().execute(async (trx) => {
    const channel = await trx
      .updateTable('channel')
      .set({ bad })
      .where('teamId', '=', member.teamId)
      .where('recordingId', '=', recordingId)
      .where('site', '=', site)
      .returning('id')
      .executeTakeFirst();
    if (!channel) notFound('channel');
    const action = bad ? 'recording.channel-marked-bad' : 'recording.channel-marked-good';
    await record(trx, member, action, { type: 'recording', id: recordingId }, { site });
  });
}
