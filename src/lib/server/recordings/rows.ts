import type { DescribedChannel, EventFacts } from '$engine';
import type { Db } from '../database';

/** PostgreSQL takes at most 65,535 parameters a statement. */
const rowsPerInsert = 4000;

export async function insertChannels(
  db: Db,
  teamId: string,
  recordingId: string,
  channels: DescribedChannel[],
): Promise<void> {
  const rows = channels.map((channel, position) => ({
    teamId,
    recordingId,
    position,
    label: storable(channel.label),
    site: storable(channel.site),
    type: storable(channel.type),
    unit: storable(channel.unit),
    samplingRateHz: channel.samplingRateHz,
    x: channel.position?.x ?? null,
    y: channel.position?.y ?? null,
    z: channel.position?.z ?? null,
    positionSource: channel.positionSource,
    bad: channel.bad,
  }));
  for (let first = 0; first < rows.length; first += rowsPerInsert) {
    await db
      .insertInto('channel')
      .values(rows.slice(first, first + rowsPerInsert))
      .execute();
  }
}

export async function insertEvents(
  db: Db,
  teamId: string,
  recordingId: string,
  events: EventFacts[],
  source: 'annotation' | 'events.tsv',
): Promise<void> {
  const rows = events.map(({ onsetS, durationS, label }) => ({
    teamId,
    recordingId,
    onsetS,
    durationS,
    label: storable(label),
    source,
  }));
  for (let first = 0; first < rows.length; first += rowsPerInsert) {
    await db
      .insertInto('event')
      .values(rows.slice(first, first + rowsPerInsert))
      .execute();
  }
}

/** PostgreSQL's text cannot hold the character of code 0. */
function storable(text: string): string {
  return text.replaceAll('\0', '');
}
