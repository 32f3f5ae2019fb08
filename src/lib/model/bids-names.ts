/** What a dropped file is for, by its name. */
export type FileKind =
  'recording' | 'events' | 'channels' | 'electrodes' | 'participants' | 'unknown';

export type SidecarKind = 'events' | 'channels' | 'electrodes';

const sidecarEnding = /(?:^|[_.-])(events|channels|electrodes|participants)\.tsv$/i;

export function kindOf(fileName: string): FileKind {
  if (/\.edf$/i.test(fileName)) return 'recording';
  const match = sidecarEnding.exec(fileName);
  return match ? (match[1]!.toLowerCase() as FileKind) : 'unknown';
}

/** The participant's code in a BIDS name ("sub-03_task-rest_eeg.edf" gives "03"), or null. */
export function participantIn(fileName: string): string | null {
  return /(?:^|_)sub-([A-Za-z0-9]{1,40})(?=[_.])/.exec(fileName)?.[1] ?? null;
}

/** Name without folder, ending and BIDS suffix: what a recording and its sidecars share. */
function stemOf(fileName: string): string {
  return fileName
    .replace(/\.edf$/i, '')
    .replace(sidecarEnding, '')
    .replace(/_(eeg|ieeg|meg)$/i, '')
    .toLowerCase();
}

function entitiesOf(stem: string): Set<string> {
  // "space" names a coordinate system and never occurs in a recording's name.
  return new Set(stem.split('_').filter((part) => part !== '' && !part.startsWith('space-')));
}

/**
 * How well a sidecar's name fits a recording's: null for not at all, otherwise the number of
 * entities they share. By the BIDS inheritance principle a sidecar fits every recording that has
 * all of the sidecar's entities, and the closest one counts.
 */
export function fit(sidecarName: string, recordingName: string): number | null {
  const sidecar = stemOf(sidecarName);
  const recording = stemOf(recordingName);
  if (sidecar === recording) return Number.POSITIVE_INFINITY;
  const parts = entitiesOf(sidecar);
  const whole = entitiesOf(recording);
  if (parts.size === 0) return null;
  for (const part of parts) {
    if (!part.includes('-') || !whole.has(part)) return null;
  }
  return parts.size;
}
