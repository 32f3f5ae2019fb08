import type { EpochRows, ShiftedWindow } from '../engine/measure/measure';

/**
 * Sums of u_j u_k* over epochs, at every sample of the rows.
 * Layout: the real parts of epoch n of site j are
 * `phasors[jStarts[n] .. jStarts[n] + sampleCount)`, its imaginary parts follow at a distance of
 * `partDistance`; k alike. Out: `sums[sample * 2]` real, `sums[sample * 2 + 1]` imaginary.
 * Overwrites `sums`; allocates nothing; does not check its arguments.
 * Cost: one complex product a sample and epoch, accumulated in f64 in the order of the epochs.
 * Source: the cross-term of the phase-locking value, Lachaux et al. 1999.
 */
export function sumCrossTerms(
  phasors: Float32Array,
  jStarts: Int32Array,
  kStarts: Int32Array,
  sums: Float64Array,
  rows: EpochRows,
): void {
  const { epochCount, sampleCount, partDistance } = rows;
  sums.fill(0, 0, sampleCount * 2);
  let n = 0;
  // Two epochs a sweep: half the traffic of the running sums.
  for (; n + 1 < epochCount; n += 2) {
    const j0 = jStarts[n];
    const k0 = kStarts[n];
    const j1 = jStarts[n + 1];
    const k1 = kStarts[n + 1];
    for (let s = 0; s < sampleCount; s++) {
      const s2 = s + partDistance;
      const a = phasors[j0 + s];
      const b = phasors[j0 + s2];
      const c = phasors[k0 + s];
      const d = phasors[k0 + s2];
      const e = phasors[j1 + s];
      const f = phasors[j1 + s2];
      const g = phasors[k1 + s];
      const h = phasors[k1 + s2];
      sums[2 * s] += a * c + b * d + (e * g + f * h);
      sums[2 * s + 1] += b * c - a * d + (f * g - e * h);
    }
  }
  for (; n < epochCount; n++) {
    const j = jStarts[n];
    const k = kStarts[n];
    for (let s = 0; s < sampleCount; s++) {
      const a = phasors[j + s];
      const b = phasors[j + s + partDistance];
      const c = phasors[k + s];
      const d = phasors[k + s + partDistance];
      sums[2 * s] += a * c + b * d;
      sums[2 * s + 1] += b * c - a * d;
    }
  }
}

/**
 * Adds u_j u_k* of one epoch at the kept samples of its rotated windows, for many permutations:
 * time t takes sample `(keptSamples[t] + shift) mod sampleCount`, each site its own shift.
 * Layout: `j` and `k` `[sample][frequency][part]`; out
 * `sums[((permutation * timeCount + t) * frequencyCount + f) * 2 + part]`.
 * Adds to `sums`; allocates nothing; does not check its arguments.
 * Cost: one complex product a feature and permutation, in f64. Both rows are read in sequence:
 * gathered from whole series, the same sums wait for memory four times as long.
 * Source: cross-term as above; the rotation is common practice.
 */
export function addShiftedCrossTerms(
  j: Float32Array,
  k: Float32Array,
  sums: Float64Array,
  window: ShiftedWindow,
): void {
  const { frequencyCount, sampleCount, keptSamples, shifts, shiftStride, permutations } = window;
  const timeCount = keptSamples.length;
  const rowLength = 2 * frequencyCount;
  let out = 0;
  for (let p = 0; p < permutations; p++) {
    const jShift = shifts[window.jShift + p * shiftStride];
    const kShift = shifts[window.kShift + p * shiftStride];
    for (let t = 0; t < timeCount; t++) {
      const js = keptSamples[t] + jShift;
      const ks = keptSamples[t] + kShift;
      const jRow = (js < sampleCount ? js : js - sampleCount) * rowLength;
      const kRow = (ks < sampleCount ? ks : ks - sampleCount) * rowLength;
      for (let f = 0; f < rowLength; f += 2, out += 2) {
        const a = j[jRow + f];
        const b = j[jRow + f + 1];
        const c = k[kRow + f];
        const d = k[kRow + f + 1];
        sums[out] += a * c + b * d;
        sums[out + 1] += b * c - a * d;
      }
    }
  }
}
