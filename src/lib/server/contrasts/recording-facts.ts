import type { StudyRecording } from '$lib/model/study-recording';
import type { Member } from '../access';
import type { Db } from '../database';

export interface RecordingSummary {
  id: string;
  sha256: string;
  name: string;
  participant: string;
}

/** All recordings of a study by name only: what the participant choice needs. */
export async function listRecordings(
  db: Db,
  member: Member,
  studyId: string,
): Promise<RecordingSummary[]> {
  return db
    .selectFrom('recording')
    .innerJoin('participant', 'participant.id', 'recording.participantId')
    .select([
      'recording.id',
      'recording.sha256',
      'recording.name',
      'participant.code as participant',
    ])
    .where('recording.teamId', '=', member.teamId)
    .where('recording.studyId', '=', studyId)
    .orderBy('participant.code')
    .orderBy('recording.name')
    .execute();
}

async function channelsOf(db: Db, member: Member, recordingIds: string[]) {
  const rows = await db
    .selectFrom('channel')
    .select([
      'recordingId',
      'label',
      'site',
      'type',
      'unit',
      'samplingRateHz',
      'bad',
      'x',
      'y',
      'z',
    ])
    .where('teamId', '=', member.teamId)
    .where('recordingId', 'in', recordingIds)
    .orderBy('position')
    .execute();
  return rows.map(({ recordingId, x, y, z, ...channel }) => ({
    recordingId,
    channel: {
      ...channel,
      position: x === null || y === null || z === null ? null : { x, y, z },
    },
  }));
}

async function eventsOf(db: Db, member: Member, recordingIds: string[]) {
  return db
    .selectFrom('event')
    .select(['recordingId', 'onsetS', 'durationS', 'label'])
    .where('teamId', '=', member.teamId)
    .where('recordingId', 'in', recordingIds)
    .orderBy('onsetS')
    .orderBy('id')
    .execute();
}

/** What is known of a study's recordings without their samples: one participant's, or those named. */
export async function getRecordingFacts(
  db: Db,
  member: Member,
  studyId: string,
  which: { participant: string } | { sha256s: string[] },
): Promise<StudyRecording[]> {
  if ('sha256s' in which && which.sha256s.length === 0) return [];
  const rows = await db
    .selectFrom('recording')
    .innerJoin('participant', 'participant.id', 'recording.participantId')
    .select([
      'recording.id',
      'recording.sha256',
      'recording.name',
      'recording.segments',
      'recording.simulated',
      'recording.sizeBytes',
      'participant.code as participant',
    ])
    .where('recording.teamId', '=', member.teamId)
    .where('recording.studyId', '=', studyId)
    .where((eb) =>
      'participant' in which
        ? eb('participant.code', '=', which.participant)
        : eb('recording.sha256', 'in', which.sha256s),
    )
    .orderBy('recording.name')
    .execute();
  if (rows.length === 0) return [];
  const ids = rows.map((row) => row.id);
  const [channels, events] = await Promise.all([
    channelsOf(db, member, ids),
    eventsOf(db, member, ids),
  ]);
  return rows.map((row) => ({
    ...row,
    channels: channels.filter((each) => each.recordingId === row.id).map((each) => each.channel),
    events: events
      .filter((each) => each.recordingId === row.id)
      .map(({ onsetS, durationS, label }) => ({ onsetS, durationS, label })),
  }));
}
