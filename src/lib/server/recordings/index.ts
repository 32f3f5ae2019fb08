export { recordingFacts, type RecordingSelection } from './facts';
export { listRecordings, type ListedRecording } from './list';
