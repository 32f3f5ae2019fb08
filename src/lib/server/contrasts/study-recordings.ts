import type { StudyRecording } from '$lib/model/study-recording';
import type { Member } from '../access';
import type { Db } from '../database';
import { listRecordings, recordingFacts } from '../recordings';

/** The recordings of one participant as the form needs them, in the order of their names. */
export async function participantRecordings(
  db: Db,
  member: Member,
  studyId: string,
  participant: string,
): Promise<StudyRecording[]> {
  const listed = await listRecordings(db, member.teamId, studyId);
  const own = listed.filter((each) => each.participant === participant);
  const ids = own.map((each) => each.id);
  const [facts, types] = await Promise.all([
    recordingFacts(db, member.teamId, { ids }),
    channelTypes(db, member, ids),
  ]);
  const byHash = new Map(facts.map((each) => [each.sha256, each]));
  return own.flatMap(({ id, sha256, simulated, sizeBytes, durationS }) => {
    const known = byHash.get(sha256);
    if (!known) return [];
    return [
      {
        ...known,
        id,
        participant,
        simulated,
        sizeBytes,
        durationS,
        eegSites: types.filter((row) => row.recordingId === id).map((row) => row.site),
      },
    ];
  });
}

function channelTypes(db: Db, member: Member, recordingIds: string[]) {
  if (recordingIds.length === 0) return Promise.resolve([]);
  return db
    .selectFrom('channel')
    .select(['recordingId', 'site'])
    .where('teamId', '=', member.teamId)
    .where('recordingId', 'in', recordingIds)
    .where('type', '=', 'EEG')
    .orderBy('position')
    .execute();
}

export interface ParticipantChoice {
  code: string;
  recordingCount: number;
}

/** Participants of a study that have recordings. */
export async function participantsWithRecordings(
  db: Db,
  member: Member,
  studyId: string,
): Promise<ParticipantChoice[]> {
  return db
    .selectFrom('participant')
    .innerJoin('recording', 'recording.participantId', 'participant.id')
    .select((eb) => ['participant.code', eb.fn.countAll<number>().as('recordingCount')])
    .where('participant.teamId', '=', member.teamId)
    .where('participant.studyId', '=', studyId)
    .groupBy('participant.code')
    .orderBy('participant.code')
    .execute();
}
