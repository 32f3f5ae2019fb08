export { createContrast, renameContrast, type Named } from './contrasts';
export { discardDraft, newVersion, saveDraft, type Saved } from './drafts';
export {
  getContrast,
  getPlanBody,
  type ContrastFacts,
  type PlanBody,
  type PlanVersion,
} from './get';
export {
  participantRecordings,
  participantsWithRecordings,
  type ParticipantChoice,
} from './study-recordings';
export { stageFacts, type RunFacts, type StageFacts } from './stage-facts';
export { changesAfterFirstLook, type AfterFirstLook } from './after-first-look';
export { planPage } from './plan-page';
export { lockPlan, type Locked } from './lock';
