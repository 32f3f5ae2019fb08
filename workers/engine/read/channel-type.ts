import { siteOf } from './sites';
import { microvoltsIn } from './units';

/**
 * Kinds of channels, in the words of BIDS 1.11.1 (channels.tsv, column `type`). OTHER is a
 * voltage whose label says nothing more, such as a depth electrode's.
 */
export const channelTypes = ['EEG', 'EOG', 'ECG', 'EMG', 'RESP', 'TRIG', 'MISC', 'OTHER'] as const;
export type ChannelType = (typeof channelTypes)[number];

/** Words in labels, as they are common in practice (no source); the first that fits is taken. */
const WORDS: [RegExp, ChannelType][] = [
  [/^EEG\b/, 'EEG'],
  [/EOG|^(LOC|ROC|E1|E2|LO1|LO2|IO1|IO2|SO1|SO2)\b/, 'EOG'],
  [/ECG|EKG/, 'ECG'],
  [/EMG|\bCHIN|\bTIB|\bLEG|\bAPB\b|\bFDI\b/, 'EMG'],
  [/RESP|THOR|ABDO|AIRFLOW|\bFLOW\b/, 'RESP'],
  [/TRIG|STATUS|STIM|MARKER|\bSTI\b|\bEVENT/, 'TRIG'],
  [/SPO2|SAO2|PULSE|\bHR\b|TEMP|LIGHT|PHOTIC|POSITION|\bACC|\bGSR\b|SNORE/, 'MISC'],
];

/** The kind of a channel, guessed from its label and unit; channels.tsv overrides it. */
export function guessChannelType(label: string, unit: string): ChannelType {
  if (siteOf(label) !== null) return 'EEG';
  const upper = label.trim().toUpperCase();
  const found = WORDS.find(([pattern]) => pattern.test(upper));
  if (found) return found[1];
  return microvoltsIn(unit) === null ? 'MISC' : 'OTHER';
}
