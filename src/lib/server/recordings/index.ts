export { ingestRecording, type Ingested, type NewRecording } from './ingest';
export { IngestError } from './ingest-error';
export { recordingFacts, type RecordingSelection } from './facts';
export { listRecordings, type ListedRecording } from './list';
export { type SidecarFile, type SidecarFiles } from './sidecars';
