import { groupFeatures, groupLanes } from './group';

/**
 * Differences of resultant lengths |S_A| / n_A - |T - S_A| / n_B, for eight features and many rows.
 * Layout: `sums[row * 16 + lane]` of A and `total[lane]` of all epochs, real parts in lanes 0..7,
 * imaginary in 8..15; out `values[row * 8 + feature]`, in -1 .. 1, no unit.
 * Overwrites `values`; allocates nothing; f32, each length at most 1. Cost: two square roots a value.
 * Source: Lachaux et al. 1999, the phase-locking value of each condition.
 */
export function resultantDifferences(
  sums: Float32Array,
  total: Float32Array,
  values: Float32Array,
  shape: { rows: number; epochsA: number; epochsB: number },
): void {
  const { fround } = Math;
  const perA = fround(1 / shape.epochsA);
  const perB = fround(1 / shape.epochsB);
  for (let row = 0; row < shape.rows; row++) {
    for (let x = 0; x < groupFeatures; x++) {
      const re = sums[row * groupLanes + x];
      const im = sums[row * groupLanes + groupFeatures + x];
      const restRe = fround(total[x] - re);
      const restIm = fround(total[groupFeatures + x] - im);
      values[row * groupFeatures + x] = lengthOf(re, im, perA) - lengthOf(restRe, restIm, perB);
    }
  }
}

/** Resultant lengths |S| / n by themselves; layout as above. */
export function resultantsOfLanes(
  sums: Float32Array,
  values: Float32Array,
  shape: { rows: number; epochs: number },
): void {
  const per = Math.fround(1 / shape.epochs);
  for (let row = 0; row < shape.rows; row++) {
    for (let x = 0; x < groupFeatures; x++) {
      const re = sums[row * groupLanes + x];
      const im = sums[row * groupLanes + groupFeatures + x];
      values[row * groupFeatures + x] = lengthOf(re, im, per);
    }
  }
}

/** Each step rounded to f32, as vectors round; rounding may carry equal phases above 1. */
function lengthOf(re: number, im: number, perEpoch: number): number {
  const { fround } = Math;
  const size = fround(Math.sqrt(fround(fround(re * re) + fround(im * im))));
  return Math.min(1, fround(size * perEpoch));
}
