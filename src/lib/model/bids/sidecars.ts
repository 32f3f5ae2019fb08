import type { EventFacts } from '$engine';
import { SidecarError, numberIn, readTsv, valueOf } from './tsv';

/** What channels.tsv says of one channel. */
export interface ChannelNote {
  name: string;
  /** As written, for example EEG, EOG, ECG, MISC. */
  type: string | null;
  bad: boolean | null;
}

export interface ElectrodePlace {
  name: string;
  x: number;
  y: number;
  z: number;
}

const labelLimit = 80;

/**
 * Events of an events.tsv, by onset. The label is trial_type, or value where that is missing.
 * Throws SidecarError.
 */
export function readEvents(fileName: string, text: string): EventFacts[] {
  const { rows } = readTsv(fileName, text, ['onset']);
  const events = rows.map(({ line, cells }) => {
    const onsetS = numberIn(fileName, line, 'onset', cells['onset']!);
    const duration = valueOf(cells['duration']);
    const durationS = duration === null ? null : numberIn(fileName, line, 'duration', duration);
    if (durationS !== null && durationS < 0) {
      throw new SidecarError(
        `${fileName}, line ${line}: duration is ${duration}; write 0 or more seconds, or n/a.`,
      );
    }
    const label = valueOf(cells['trial_type']) ?? valueOf(cells['value']) ?? 'unlabelled';
    if (label.length > labelLimit) {
      throw new SidecarError(
        `${fileName}, line ${line}: the label has ${label.length} characters; ` +
          `${labelLimit} is the most.`,
      );
    }
    return { onsetS, durationS, label };
  });
  if (events.length === 0) {
    throw new SidecarError(`${fileName}: holds no event. Leave the file out to use annotations.`);
  }
  return events.sort((first, second) => first.onsetS - second.onsetS);
}

/** Types and good-or-bad marks of a channels.tsv. Throws SidecarError. */
export function readChannels(fileName: string, text: string): ChannelNote[] {
  const { rows } = readTsv(fileName, text, ['name']);
  return rows.map(({ line, cells }) => {
    const status = valueOf(cells['status'])?.toLowerCase() ?? null;
    if (status !== null && status !== 'good' && status !== 'bad') {
      throw new SidecarError(
        `${fileName}, line ${line}: status is "${cells['status']}"; write good, bad or n/a.`,
      );
    }
    const bad = status === null ? null : status === 'bad';
    return { name: cells['name']!, type: valueOf(cells['type']), bad };
  });
}

/** Positions of an electrodes.tsv as written; electrodes without a position are left out. */
export function readElectrodes(fileName: string, text: string): ElectrodePlace[] {
  const { rows } = readTsv(fileName, text, ['name', 'x', 'y', 'z']);
  return rows.flatMap(({ line, cells }) => {
    const [x, y, z] = (['x', 'y', 'z'] as const).map((axis) => {
      const cell = valueOf(cells[axis]);
      return cell === null ? null : numberIn(fileName, line, axis, cell);
    });
    if (x == null || y == null || z == null) return [];
    return [{ name: cells['name']!, x, y, z }];
  });
}

/** Codes of a participants.tsv without "sub-"; no other column is read or kept. */
export function readParticipants(fileName: string, text: string): string[] {
  const { rows } = readTsv(fileName, text, ['participant_id']);
  return rows.map(({ line, cells }) => {
    const code = cells['participant_id']!.replace(/^sub-/, '');
    if (!participantCodePattern.test(code)) {
      throw new SidecarError(
        `${fileName}, line ${line}: participant_id is "${cells['participant_id']}". ` +
          participantCodeRule,
      );
    }
    return code;
  });
}

/** A code, never a name; the database holds the same rule. */
export const participantCodePattern = /^[A-Za-z0-9_-]{1,40}$/;
export const participantCodeRule =
  'A code has 1 to 40 letters, digits, hyphens or underscores, and names nobody.';
