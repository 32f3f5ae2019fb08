import type { Caution, CautionInput, CautionRule } from './caution';
import * as epochs from './epoch-cautions';
import * as signal from './signal-cautions';
import * as network from './network-cautions';
import * as test from './test-cautions';

export type { Caution, CautionCode } from './caution';

/** In the order the form shows them: what stops, what can mislead, how to read the outcome. */
const rules: CautionRule[] = [
  epochs.tooFewEpochs,
  signal.tooMuchMemory,
  epochs.blocksOfOneLabel,
  test.windowTooLong,
  network.componentsOfFewPairs,
  network.componentsMemory,
  test.fewPermutations,
  test.fewArrangements,
  test.fewForMaxima,
  test.synchronyInBoth,
  epochs.fewEpochs,
  epochs.epochsLost,
  epochs.unequalEpochs,
  epochs.differentRecordings,
  epochs.conditionsInBlocks,
  epochs.epochsOverlap,
  signal.badSites,
  signal.referenceAnalysed,
  signal.referenceOfFew,
  signal.laplacianOfFew,
  test.shortWindowForShifts,
  signal.wideKernels,
  signal.phaseMethodCaution,
  signal.lineFrequency,
  signal.sharedSources,
  test.measureCaution,
  test.coarseP,
  test.clusterClaim,
  test.claimOfNeighbours,
  test.falseDiscoveryDependence,
];

/** The cautions that apply to a plan, most pressing first. */
export function cautionsOf(input: CautionInput): Caution[] {
  return rules.map((rule) => rule(input)).filter((caution) => caution !== null);
}
