import { groupFeatures } from './group';

/** What standardises one condition's values of eight features: mean, and 1 / sd or 0. */
export interface GroupScale {
  mean: Float64Array;
  inverse: Float64Array;
}

/**
 * z_A - z_B of eight features and many rows, rounded to f32, in place of `a`.
 * Layout: `a[row * 8 + feature]`, `b` alike. A feature whose inverse is 0 in either condition must
 * have 0 in both: there is no z to compare. Mutates `a`; allocates nothing; f64 arithmetic.
 */
export function standardisedDifferences(
  a: Float32Array,
  b: Float32Array,
  scaleA: GroupScale,
  scaleB: GroupScale,
  rows: number,
): void {
  for (let at = 0; at < rows * groupFeatures; at++) {
    const x = at & (groupFeatures - 1);
    const zA = (a[at] - scaleA.mean[x]) * scaleA.inverse[x];
    const zB = (b[at] - scaleB.mean[x]) * scaleB.inverse[x];
    a[at] = zA - zB;
  }
}
