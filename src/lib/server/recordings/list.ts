import { sql } from 'kysely';
import type { Db } from '../database';

export interface ListedRecording {
  id: string;
  sha256: string;
  name: string;
  participant: string;
  format: 'EDF' | 'EDF+C' | 'EDF+D';
  durationS: number;
  sizeBytes: number;
  channelCount: number;
  badCount: number;
  /** Every rate that occurs, ascending; mostly one. */
  samplingRatesHz: number[];
  /** Labels with their counts, the most frequent first. */
  events: { label: string; count: number }[];
  notices: { code: string; message: string }[];
  identificationKept: boolean;
  simulated: boolean;
  createdAt: Date;
}

/** A study's recordings by participant and name, each with what a person looks for in a list. */
export async function listRecordings(
  db: Db,
  teamId: string,
  studyId: string,
): Promise<ListedRecording[]> {
  const rows = await db
    .selectFrom('recording')
    .innerJoin('participant', 'participant.id', 'recording.participantId')
    .select([
      'recording.id',
      'recording.sha256',
      'recording.name',
      'participant.code as participant',
      'recording.format',
      'recording.durationS',
      'recording.sizeBytes',
      'recording.notices',
      'recording.identificationKept',
      'recording.simulated',
      'recording.createdAt',
    ])
    .where('recording.teamId', '=', teamId)
    .where('recording.studyId', '=', studyId)
    .orderBy('participant.code')
    .orderBy('recording.name')
    .execute();
  const ids = rows.map((row) => row.id);
  if (ids.length === 0) return [];
  const [channels, events] = await Promise.all([
    channelSummary(db, teamId, ids),
    eventCounts(db, teamId, ids),
  ]);
  return rows.map((row) => ({
    ...row,
    ...(channels.get(row.id) ?? { channelCount: 0, badCount: 0, samplingRatesHz: [] }),
    events: events.get(row.id) ?? [],
  }));
}

async function channelSummary(db: Db, teamId: string, recordingIds: string[]) {
  const rows = await db
    .selectFrom('channel')
    .select([
      'recordingId',
      sql<number>`count(*)`.as('channelCount'),
      sql<number>`count(*) filter (where bad)`.as('badCount'),
      sql<number[]>`array_agg(distinct sampling_rate_hz order by sampling_rate_hz)`.as(
        'samplingRatesHz',
      ),
    ])
    .where('teamId', '=', teamId)
    .where('recordingId', 'in', recordingIds)
    .groupBy('recordingId')
    .execute();
  return new Map(rows.map(({ recordingId, ...summary }) => [recordingId, summary]));
}

/** Counts by label for each recording, the most frequent label first. */
async function eventCounts(db: Db, teamId: string, recordingIds: string[]) {
  const rows = await db
    .selectFrom('event')
    .select(['recordingId', 'label', sql<number>`count(*)`.as('count')])
    .where('teamId', '=', teamId)
    .where('recordingId', 'in', recordingIds)
    .groupBy(['recordingId', 'label'])
    .orderBy('count', 'desc')
    .orderBy('label')
    .execute();
  const counts = new Map<string, { label: string; count: number }[]>();
  for (const { recordingId, label, count } of rows) {
    counts.set(recordingId, [...(counts.get(recordingId) ?? []), { label, count }]);
  }
  return counts;
}
