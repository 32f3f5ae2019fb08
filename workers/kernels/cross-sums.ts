import type { EpochRows, ShiftedRows } from '../engine/measure/measure';

/**
 * Sums of u_j u_k* over epochs, at every sample of the rows.
 * Layout: the real parts of epoch n of site j are
 * `phasors[jStarts[n] .. jStarts[n] + samplesPerEpoch)`, its imaginary parts follow at a distance of
 * `samplesPerEpoch`; k alike. Out: `sums[sample * 2]` real, `sums[sample * 2 + 1]` imaginary.
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
  const { epochCount, samplesPerEpoch } = rows;
  sums.fill(0, 0, samplesPerEpoch * 2);
  let n = 0;
  // Two epochs a sweep: half the traffic of the running sums.
  for (; n + 1 < epochCount; n += 2) {
    const j0 = jStarts[n];
    const k0 = kStarts[n];
    const j1 = jStarts[n + 1];
    const k1 = kStarts[n + 1];
    for (let s = 0; s < samplesPerEpoch; s++) {
      const s2 = s + samplesPerEpoch;
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
    for (let s = 0; s < samplesPerEpoch; s++) {
      const a = phasors[j + s];
      const b = phasors[j + s + samplesPerEpoch];
      const c = phasors[k + s];
      const d = phasors[k + s + samplesPerEpoch];
      sums[2 * s] += a * c + b * d;
      sums[2 * s + 1] += b * c - a * d;
    }
  }
}

/**
 * The same at the kept samples of windows that are rotated: feature (f, t) of epoch n takes sample
 * `(keptSamples[t] + shift[n]) mod samplesPerFrequency` of frequency f, each site its own shift.
 * Out: `sums[(f * keptCount + t) * 2 + part]`.
 * Overwrites `sums` and the two scratch lists of samples; allocates nothing.
 * Cost: one complex product a feature and epoch. Source: as above; the rotation is common practice.
 */
export function sumShiftedCrossTerms(
  phasors: Float32Array,
  jStarts: Int32Array,
  kStarts: Int32Array,
  sums: Float64Array,
  rows: ShiftedRows,
): void {
  const { epochCount, samplesPerEpoch, frequencyCount, samplesPerFrequency } = rows;
  const { keptSamples, jShifts, kShifts, jSamples, kSamples } = rows;
  const timeCount = keptSamples.length;
  sums.fill(0, 0, frequencyCount * timeCount * 2);
  for (let n = 0; n < epochCount; n++) {
    rotate(keptSamples, jShifts[n], samplesPerFrequency, jSamples);
    rotate(keptSamples, kShifts[n], samplesPerFrequency, kSamples);
    let out = 0;
    for (let f = 0; f < frequencyCount; f++) {
      const j = jStarts[n] + f * samplesPerFrequency;
      const k = kStarts[n] + f * samplesPerFrequency;
      for (let t = 0; t < timeCount; t++, out += 2) {
        const js = j + jSamples[t];
        const ks = k + kSamples[t];
        const a = phasors[js];
        const b = phasors[js + samplesPerEpoch];
        const c = phasors[ks];
        const d = phasors[ks + samplesPerEpoch];
        sums[out] += a * c + b * d;
        sums[out + 1] += b * c - a * d;
      }
    }
  }
}

function rotate(kept: Int32Array, shift: number, length: number, samples: Int32Array): void {
  for (let t = 0; t < kept.length; t++) {
    const sample = kept[t] + shift;
    samples[t] = sample < length ? sample : sample - length;
  }
}
