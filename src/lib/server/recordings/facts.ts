import type { ChannelFacts, EventFacts, RecordingFacts } from '$engine';
import type { Db } from '../database';

/** Which recordings: by row, or by the hashes that a plan of this study names. */
export type RecordingSelection = { ids: string[] } | { studyId: string; sha256s: string[] };

/**
 * What the engine knows of recordings before it reads samples. Answers in the order asked for;
 * a recording that is not in the team (or no longer there) is left out.
 */
export async function recordingFacts(
  db: Db,
  teamId: string,
  selection: RecordingSelection,
): Promise<RecordingFacts[]> {
  const wanted = 'ids' in selection ? selection.ids : selection.sha256s;
  if (wanted.length === 0) return [];
  const base = db
    .selectFrom('recording')
    .select(['id', 'sha256', 'name', 'segments'])
    .where('teamId', '=', teamId);
  const rows = await (
    'ids' in selection
      ? base.where('id', 'in', wanted)
      : base.where('studyId', '=', selection.studyId).where('sha256', 'in', wanted)
  ).execute();
  const ids = rows.map((row) => row.id);
  if (ids.length === 0) return [];
  const [channels, events] = await Promise.all([
    channelFacts(db, teamId, ids),
    eventFacts(db, teamId, ids),
  ]);
  const facts = new Map(
    rows.map(({ id, sha256, name, segments }) => [
      'ids' in selection ? id : sha256,
      { sha256, name, segments, channels: channels.get(id) ?? [], events: events.get(id) ?? [] },
    ]),
  );
  return wanted.flatMap((key) => facts.get(key) ?? []);
}

async function channelFacts(db: Db, teamId: string, recordingIds: string[]) {
  const rows = await db
    .selectFrom('channel')
    .select(['recordingId', 'label', 'site', 'unit', 'samplingRateHz', 'bad', 'x', 'y', 'z'])
    .where('teamId', '=', teamId)
    .where('recordingId', 'in', recordingIds)
    .orderBy('position')
    .execute();
  return grouped(rows, ({ x, y, z, label, site, unit, samplingRateHz, bad }): ChannelFacts => {
    const position = x === null || y === null || z === null ? null : { x, y, z };
    return { label, site, unit, samplingRateHz, bad, position };
  });
}

async function eventFacts(db: Db, teamId: string, recordingIds: string[]) {
  const rows = await db
    .selectFrom('event')
    .select(['recordingId', 'onsetS', 'durationS', 'label'])
    .where('teamId', '=', teamId)
    .where('recordingId', 'in', recordingIds)
    .orderBy('onsetS')
    .orderBy('id')
    .execute();
  return grouped(rows, ({ onsetS, durationS, label }): EventFacts => ({
    onsetS,
    durationS,
    label,
  }));
}

function grouped<Row extends { recordingId: string }, Item>(
  rows: Row[],
  item: (row: Row) => Item,
): Map<string, Item[]> {
  const groups = new Map<string, Item[]>();
  for (const row of rows) {
    const group = groups.get(row.recordingId);
    if (group) group.push(item(row));
    else groups.set(row.recordingId, [item(row)]);
  }
  return groups;
}
