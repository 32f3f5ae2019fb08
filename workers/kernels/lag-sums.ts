import type { EpochRows, ShiftedWindow } from '../engine/measure/measure';

/**
 * Sine of a lag that counts as none: twice what rounding to f32 can make of two phasors that point
 * the same or opposite ways. Without it, the sign of a zero lag would be the sign of its rounding.
 */
export const zeroLagSine = 2 ** -22;

const zeroLagSquare = zeroLagSine * zeroLagSine;

/** Im of z_j z_k*, exactly 0 where the lag is zero or half a turn to rounding. */
function lagPart(a: number, b: number, c: number, d: number): number {
  const im = b * c - a * d;
  return im * im > zeroLagSquare * (a * a + b * b) * (c * c + d * d) ? im : 0;
}

/**
 * Sums over epochs of the sign of Im z_j z_k*, sign 0 being 0.
 * Layout: phasors as `sumCrossTerms`; out `sums[sample]`. Overwrites `sums`; allocates nothing.
 * Source: Stam et al. 2007.
 */
export function sumLagSigns(
  phasors: Float32Array,
  jStarts: Int32Array,
  kStarts: Int32Array,
  sums: Float64Array,
  rows: EpochRows,
): void {
  const { epochCount, sampleCount, partDistance } = rows;
  sums.fill(0, 0, sampleCount);
  for (let n = 0; n < epochCount; n++) {
    const j = jStarts[n];
    const k = kStarts[n];
    for (let s = 0; s < sampleCount; s++) {
      const at = s + partDistance;
      sums[s] += Math.sign(
        lagPart(phasors[j + s], phasors[j + at], phasors[k + s], phasors[k + at]),
      );
    }
  }
}

/**
 * Adds one epoch's signs under each permutation's shifts; layout of `j`, `k` and `window` as
 * `addShiftedCrossTerms`, out `sums[(permutation * timeCount + t) * frequencyCount + f]`.
 */
export function addShiftedLagSigns(
  j: Float32Array,
  k: Float32Array,
  sums: Float64Array,
  window: ShiftedWindow,
): void {
  const { frequencyCount, sampleCount, keptSamples, shifts, shiftStride, permutations } = window;
  const rowLength = 2 * frequencyCount;
  let out = 0;
  for (let p = 0; p < permutations; p++) {
    const jShift = shifts[window.jShift + p * shiftStride];
    const kShift = shifts[window.kShift + p * shiftStride];
    for (const kept of keptSamples) {
      const jRow = ((kept + jShift) % sampleCount) * rowLength;
      const kRow = ((kept + kShift) % sampleCount) * rowLength;
      for (let f = 0; f < rowLength; f += 2, out++) {
        sums[out] += Math.sign(lagPart(j[jRow + f], j[jRow + f + 1], k[kRow + f], k[kRow + f + 1]));
      }
    }
  }
}

/**
 * Sums over epochs of Im, |Im| and Im^2 of z_j z_k*.
 * Layout: phasors, here with their amplitudes, as `sumCrossTerms`; out
 * `sums[sample * 3 + (0 Im, 1 |Im|, 2 Im^2)]`. Overwrites `sums`; allocates nothing.
 * Source: Vinck et al. 2011.
 */
export function sumLagWeights(
  phasors: Float32Array,
  jStarts: Int32Array,
  kStarts: Int32Array,
  sums: Float64Array,
  rows: EpochRows,
): void {
  const { epochCount, sampleCount, partDistance } = rows;
  sums.fill(0, 0, sampleCount * 3);
  for (let n = 0; n < epochCount; n++) {
    const j = jStarts[n];
    const k = kStarts[n];
    for (let s = 0; s < sampleCount; s++) {
      const at = s + partDistance;
      const im = lagPart(phasors[j + s], phasors[j + at], phasors[k + s], phasors[k + at]);
      sums[3 * s] += im;
      sums[3 * s + 1] += Math.abs(im);
      sums[3 * s + 2] += im * im;
    }
  }
}

/** Adds one epoch's Im, |Im| and Im^2 under each permutation's shifts, three terms a feature. */
export function addShiftedLagWeights(
  j: Float32Array,
  k: Float32Array,
  sums: Float64Array,
  window: ShiftedWindow,
): void {
  const { frequencyCount, sampleCount, keptSamples, shifts, shiftStride, permutations } = window;
  const rowLength = 2 * frequencyCount;
  let out = 0;
  for (let p = 0; p < permutations; p++) {
    const jShift = shifts[window.jShift + p * shiftStride];
    const kShift = shifts[window.kShift + p * shiftStride];
    for (const kept of keptSamples) {
      const jRow = ((kept + jShift) % sampleCount) * rowLength;
      const kRow = ((kept + kShift) % sampleCount) * rowLength;
      for (let f = 0; f < rowLength; f += 2, out += 3) {
        const im = lagPart(j[jRow + f], j[jRow + f + 1], k[kRow + f], k[kRow + f + 1]);
        sums[out] += im;
        sums[out + 1] += Math.abs(im);
        sums[out + 2] += im * im;
      }
    }
  }
}
