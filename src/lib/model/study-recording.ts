import type { RecordingFacts } from '$engine';

/** A recording as the Define page knows it: the engine's facts, whose it is, and which sites are EEG. */
export interface StudyRecording extends RecordingFacts {
  id: string;
  /** The participant's code. */
  participant: string;
  simulated: boolean;
  sizeBytes: number;
  durationS: number;
  eegSites: string[];
}

/** File names by SHA-256. */
export function recordingNames(recordings: readonly StudyRecording[]): Map<string, string> {
  return new Map(recordings.map((each) => [each.sha256, each.name]));
}
