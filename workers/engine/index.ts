/** The engine's public face: what the pages, the server and the headless runner may import. */
export * from './types';
export { engineVersion } from './version';
export { planLimits, planSchema, type Plan, type Rule } from './plan';
export { PlanError } from './errors';
export { axesOf, epochReader, planEpochs, screenEpochs, type RecordingSource } from './prepare';
export { epochKey, withoutLost } from './prepare';
export {
  consequencesOf,
  type Caution,
  type CautionCode,
  type Consequences,
  type EpochCounts,
} from './consequences';
export type { KernelWidth, PhaseField, PhaseMethod } from './phase/method';
export {
  phaseMethod,
  phaseMethodIds,
  phaseMethods,
  type PhaseMethodId,
  type PhaseSettings,
} from './phase/registry';
export { layoutOf } from './phase/phases';
export type { PhaseLayout } from './phase/layout';
export { writePhases } from './phase/write-phases';
export { phaseBytes } from './phase/phase-bytes';
export { calibrate } from './calibrate';
export * from './read';

export { measures, measureIds, measureOf, type MeasureId } from './measure/registry';
export type { Measure } from './measure/measure';
export { nullModels, nullModelOf, nullIds, type NullId } from './null/registry';
export { nullCaution } from './null/caution';
export type { NullModel } from './null/model';
export { corrections, correctionOf, correctionIds, type CorrectionId } from './correct/registry';
export type { ClaimMaps, Correction } from './correct/correction';
export { epochBlocks } from './null/epoch-blocks';
export { initialSettings, type SettingField, type Settings } from './settings';
export { drawPermutations, drawsByteLength } from './null/draws';
export { computePairs, type DrawData, type PhaseData } from './pairs';
export { BlockGatherer, mergeBlocks, mergeShares, partLists } from './pair-block';
export type { GatheredBlocks } from './pair-block';
export { histogramBins } from './histogram';
export { ties } from './ties';
export { planParts } from './correct/plan-parts';
export { conclude, concludeFrom, type Claims } from './correct/conclude';
export { checkMaps } from './correct/check-maps';
export { clopperPearson } from './correct/clopper-pearson';
export { passes, permutationP, tailP, tailPWithInterval } from './correct/p-value';
export { tailExceedances, tailSigns, tailStatistic } from './correct/tail';
export { ascending, countAtLeast } from './correct/distribution';
export { canonicalJson } from './canonical';
export { planHash, runDigest, sha256Hex, type RunCounts } from './digest';
export { phaseRose, rosePetals, type Rose } from './phase/rose';
export {
  groupLevel,
  type GroupEdge,
  type GroupInput,
  type GroupOutcome,
} from './group/group-level';
export type { GroupDesign, ParticipantMap } from './group/design';
