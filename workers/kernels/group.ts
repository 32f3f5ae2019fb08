/** Neighbouring features that the kernels work on side by side: two vectors of four. */
export const groupFeatures = 8;

/** Lanes of a group with two terms a feature, all real parts before all imaginary ones. */
export const groupLanes = 2 * groupFeatures;

export function groupCount(featureCount: number): number {
  return Math.ceil(featureCount / groupFeatures);
}

/** Features that whole groups have room for. */
export function paddedFeatures(featureCount: number): number {
  return groupCount(featureCount) * groupFeatures;
}
