import { groupFeatures, groupLanes } from './group';

/**
 * Sums of u_j u_k* over epochs for eight features, each row pairing j's epochs with k's in an order
 * of its own.
 * Layout: `j` and `k` `[epoch * 16 + lane]`, real parts in lanes 0..7 and imaginary in 8..15;
 * `order[row * epochCount + n]` is the epoch of k that stands beside epoch n of j; out
 * `sums[row * 16 + lane]`. Overwrites `sums`; allocates nothing; f32 in the order of j's epochs.
 * Cost: a complex product a feature, epoch and row. Source: cross-term, Lachaux et al. 1999.
 */
export function sumShuffledLanes(
  j: Float32Array,
  k: Float32Array,
  order: Uint16Array,
  sums: Float32Array,
  shape: { rows: number; epochCount: number },
): void {
  const { rows, epochCount } = shape;
  const { fround } = Math;
  for (let row = 0; row < rows; row++) {
    for (let x = 0; x < groupFeatures; x++) {
      let re = 0;
      let im = 0;
      for (let n = 0; n < epochCount; n++) {
        const at = n * groupLanes + x;
        const other = order[row * epochCount + n] * groupLanes + x;
        const a = j[at];
        const b = j[at + groupFeatures];
        const c = k[other];
        const d = k[other + groupFeatures];
        re = fround(re + fround(fround(a * c) + fround(b * d)));
        im = fround(im + fround(fround(b * c) - fround(a * d)));
      }
      sums[row * groupLanes + x] = re;
      sums[row * groupLanes + groupFeatures + x] = im;
    }
  }
}
