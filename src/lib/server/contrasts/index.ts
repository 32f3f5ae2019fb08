export { createContrast, renameContrast, type Named } from './contrasts';
export { discardDraft, newVersion, saveDraft, type Saved } from './drafts';
export {
  getContrast,
  getPlanBody,
  type ContrastFacts,
  type PlanBody,
  type PlanVersion,
} from './get';
export { getRecordingFacts, listRecordings, type RecordingSummary } from './recording-facts';
