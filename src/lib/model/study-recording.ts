import type { ChannelFacts, RecordingFacts } from '$engine';

/** A recording as the Define and Run pages know it: the engine's facts, and whose it is. */
export interface StudyRecording extends RecordingFacts {
  id: string;
  /** The participant's code. */
  participant: string;
  simulated: boolean;
  sizeBytes: number;
  channels: (ChannelFacts & { type: string })[];
}
