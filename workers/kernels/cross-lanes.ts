import { groupFeatures, groupLanes } from './group';

/**
 * Terms u_j u_k* of eight neighbouring features at every epoch.
 * Layout: the phasors of one site, `[epoch][part][sample]` as phase/layout.ts has them; out
 * `terms[epoch * 16 + lane]`, lanes 0..7 real and 8..15 imaginary parts of features
 * `first .. first + 7`. Beyond `count` the last feature is repeated, so that no maximum over lanes
 * sees another value. Overwrites `terms`; allocates nothing; f32 arithmetic, error below 2e-7.
 * Cost: one complex product a feature and epoch. Source: Lachaux et al. 1999.
 */
export function crossLanes(
  j: Float32Array,
  k: Float32Array,
  terms: Float32Array,
  shape: { epochCount: number; samplesPerEpoch: number; first: number; count: number },
): void {
  const { epochCount, samplesPerEpoch, first, count } = shape;
  const { fround } = Math;
  for (let n = 0; n < epochCount; n++) {
    const row = n * 2 * samplesPerEpoch + first;
    for (let lane = 0; lane < groupFeatures; lane++) {
      const at = row + Math.min(lane, count - 1);
      const a = j[at];
      const b = j[at + samplesPerEpoch];
      const c = k[at];
      const d = k[at + samplesPerEpoch];
      const out = n * groupLanes + lane;
      terms[out] = fround(a * c) + fround(b * d);
      terms[out + groupFeatures] = fround(b * c) - fround(a * d);
    }
  }
}

/**
 * Sums of 16 lanes over epochs `from .. to - 1`, in f64: `sums[lane]` from `terms[epoch * 16 + lane]`.
 * Overwrites `sums`; allocates nothing.
 */
export function sumLanes(
  terms: Float32Array,
  sums: Float64Array,
  range: { from: number; to: number },
): void {
  sums.fill(0, 0, groupLanes);
  for (let n = range.from; n < range.to; n++) {
    for (let lane = 0; lane < groupLanes; lane++) sums[lane] += terms[n * groupLanes + lane];
  }
}

/**
 * The phasors of eight neighbouring features of one site at every epoch, side by side: the layout
 * and the repeated last feature of `crossLanes`. Overwrites `lanes`; allocates nothing.
 */
export function siteLanes(
  phasors: Float32Array,
  lanes: Float32Array,
  shape: { epochCount: number; samplesPerEpoch: number; first: number; count: number },
): void {
  const { epochCount, samplesPerEpoch, first, count } = shape;
  for (let n = 0; n < epochCount; n++) {
    const row = n * 2 * samplesPerEpoch + first;
    for (let lane = 0; lane < groupFeatures; lane++) {
      const at = row + Math.min(lane, count - 1);
      lanes[n * groupLanes + lane] = phasors[at];
      lanes[n * groupLanes + groupFeatures + lane] = phasors[at + samplesPerEpoch];
    }
  }
}
