import { SidecarError } from './sidecar-error';
import { numberIn, parseTsv, textIn, type TsvRow, type TsvTable } from './tsv';
import type { EventFacts } from '../types';

/** A row of channels.tsv. */
export interface SidecarChannel {
  name: string;
  type: string;
  units: string | null;
  bad: boolean;
}

/** A row of electrodes.tsv, in the file's own unit and axes; null where the place is n/a. */
export interface SidecarElectrode {
  name: string;
  place: [number, number, number] | null;
}

export interface SidecarParticipant {
  /** Without "sub-". */
  code: string;
  line: number;
}

/**
 * Reads events.tsv (BIDS 1.11.1): onset and duration in seconds. The label is `trial_type`, or
 * `value` where there is none, or "event". In order of onset.
 * @throws SidecarError
 */
export function parseEvents(file: string, bytes: Uint8Array): EventFacts[] {
  const table = parseTsv(file, bytes, ['onset', 'duration']);
  const events = table.rows.map((row) => {
    textIn(table, row, 'onset');
    const onsetS = numberIn(table, row, 'onset')!;
    const durationS = numberIn(table, row, 'duration');
    if (durationS !== null && durationS < 0) {
      const problem = 'is below 0 s';
      const remedy = 'Write 0 or more, or n/a.';
      throw new SidecarError(file, row.line, 'duration', String(durationS), problem, remedy);
    }
    const label = row.value('trial_type') ?? row.value('value') ?? 'event';
    return { onsetS, durationS, label };
  });
  return events.sort((a, b) => a.onsetS - b.onsetS);
}

/**
 * Reads channels.tsv: name, type, units, and status where it is given.
 * @throws SidecarError
 */
export function parseChannels(file: string, bytes: Uint8Array): SidecarChannel[] {
  const table = parseTsv(file, bytes, ['name', 'type', 'units']);
  refuseDoubles(table, 'name');
  return table.rows.map((row) => {
    const status = row.value('status')?.toLowerCase() ?? 'good';
    if (status !== 'good' && status !== 'bad') {
      const remedy = 'Write good, bad or n/a.';
      throw new SidecarError(file, row.line, 'status', status, 'is no status', remedy);
    }
    return {
      name: textIn(table, row, 'name'),
      type: textIn(table, row, 'type').toUpperCase(),
      units: row.value('units'),
      bad: status === 'bad',
    };
  });
}

/**
 * Reads electrodes.tsv: name, x, y, z.
 * @throws SidecarError
 */
export function parseElectrodes(file: string, bytes: Uint8Array): SidecarElectrode[] {
  const table = parseTsv(file, bytes, ['name', 'x', 'y', 'z']);
  refuseDoubles(table, 'name');
  return table.rows.map((row) => {
    const [x, y, z] = ['x', 'y', 'z'].map((column) => numberIn(table, row, column));
    const isPlaced = x !== null && y !== null && z !== null;
    return { name: textIn(table, row, 'name'), place: isPlaced ? [x, y, z] : null };
  });
}

/**
 * Reads participants.tsv: `participant_id`, with or without "sub-".
 * @throws SidecarError
 */
export function parseParticipants(file: string, bytes: Uint8Array): SidecarParticipant[] {
  const table = parseTsv(file, bytes, ['participant_id']);
  refuseDoubles(table, 'participant_id');
  return table.rows.map((row) => ({ code: participantCode(table, row), line: row.line }));
}

function participantCode(table: TsvTable, row: TsvRow): string {
  const id = textIn(table, row, 'participant_id');
  const code = id.replace(/^sub-/, '');
  if (!/^[A-Za-z0-9_-]{1,40}$/.test(code)) {
    const problem = 'is no participant code';
    const remedy = 'Use 1 to 40 letters, digits, "-" or "_"; a code, never a name.';
    throw new SidecarError(table.file, row.line, 'participant_id', id, problem, remedy);
  }
  return code;
}

function refuseDoubles(table: TsvTable, column: string): void {
  const seen = new Map<string, number>();
  for (const row of table.rows) {
    const value = row.value(column);
    if (value === null) continue;
    const before = seen.get(value);
    if (before !== undefined) {
      const problem = `stands in line ${before} already`;
      throw new SidecarError(table.file, row.line, column, value, problem, 'Name each once.');
    }
    seen.set(value, row.line);
  }
}
