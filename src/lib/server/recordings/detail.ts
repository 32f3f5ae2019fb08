import { notFound } from '../access/not-found';
import type { Db } from '../database';
import { recordingFacts } from './facts';

/** Everything the recording's own page shows, fields chosen by name. */
export async function recordingDetail(
  db: Db,
  teamId: string,
  studyId: string,
  recordingId: string,
) {
  const recording = await db
    .selectFrom('recording')
    .innerJoin('participant', 'participant.id', 'recording.participantId')
    .innerJoin('person', 'person.id', 'recording.uploadedBy')
    .innerJoin('study', 'study.id', 'recording.studyId')
    .select([
      'recording.id',
      'recording.name',
      'recording.sha256',
      'recording.sizeBytes',
      'recording.format',
      'recording.startedAt',
      'recording.durationS',
      'recording.recordCount',
      'recording.recordDurationS',
      'recording.notices',
      'recording.identificationKept',
      'recording.simulated',
      'recording.createdAt',
      'participant.code as participant',
      'person.name as uploadedBy',
      'study.name as studyName',
    ])
    .where('recording.teamId', '=', teamId)
    .where('recording.studyId', '=', studyId)
    .where('recording.id', '=', recordingId)
    .executeTakeFirst();
  if (!recording) notFound('recording');
  const [[facts], channels, eventSource] = await Promise.all([
    recordingFacts(db, teamId, { ids: [recordingId] }),
    channelDetails(db, teamId, recordingId),
    sourceOfEvents(db, teamId, recordingId),
  ]);
  if (!facts) notFound('recording');
  const { segments, events } = facts;
  return { ...recording, segments, events, channels, eventSource };
}

export type RecordingDetail = Awaited<ReturnType<typeof recordingDetail>>;

/** What the channel table shows beyond the facts; the same order as the facts' channels. */
async function channelDetails(db: Db, teamId: string, recordingId: string) {
  const rows = await db
    .selectFrom('channel')
    .select(['label', 'site', 'type', 'unit', 'samplingRateHz', 'positionSource', 'bad'])
    .select(['x', 'y', 'z'])
    .where('teamId', '=', teamId)
    .where('recordingId', '=', recordingId)
    .orderBy('position')
    .execute();
  return rows.map(({ x, y, z, ...channel }) => ({
    ...channel,
    position: x === null || y === null || z === null ? null : { x, y, z },
  }));
}

async function sourceOfEvents(db: Db, teamId: string, recordingId: string) {
  const event = await db
    .selectFrom('event')
    .select('source')
    .where('teamId', '=', teamId)
    .where('recordingId', '=', recordingId)
    .limit(1)
    .executeTakeFirst();
  return event?.source ?? null;
}
