import { debiasedWeightedPhaseLagIndex } from './debiased-weighted-phase-lag-index';
import { ispc } from './ispc';
import { laggedPart } from './lagged-part';
import { pairwisePhaseConsistency } from './pairwise-phase-consistency';
import { phaseLagIndex } from './phase-lag-index';
import { weightedPhaseLagIndex } from './weighted-phase-lag-index';

/** In the order the form shows them. */
export const measures = [
  ispc,
  pairwisePhaseConsistency,
  laggedPart,
  phaseLagIndex,
  weightedPhaseLagIndex,
  debiasedWeightedPhaseLagIndex,
] as const;

export type MeasureId = (typeof measures)[number]['id'];

/** Ids in the order the form shows them. */
export const measureIds = measures.map((measure) => measure.id) as [MeasureId, ...MeasureId[]];

/** @throws RangeError for an id that is not registered. */
export function measureOf(id: MeasureId): (typeof measures)[number] {
  const found = measures.find((measure) => measure.id === id);
  if (!found) throw new RangeError(`measure "${String(id)}" is not registered`);
  return found;
}
