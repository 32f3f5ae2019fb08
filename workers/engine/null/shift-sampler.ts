import type { ShiftedWindow } from '../measure/measure';
import type { PairSampler, PermutationRange, RunInput } from './model';

/** Running sums that stay in a core's cache, elements of f64. */
const cachedSums = 2 ** 17;

/**
 * Surrogates of windows rotated in time. Epoch after epoch is laid out so that a shift moves whole
 * rows, and is added to the sums of some hundred permutations at once: each epoch's window then
 * stays in cache while it is used.
 */
export function shiftSampler(run: RunInput): PairSampler {
  const { measure, layout, shape, featureCount } = run;
  const { frequencyCount, samplesPerFrequency: sampleCount, keptSamples } = layout;
  const { epochCount, siteCount } = layout;
  const sumsPerPermutation = featureCount * measure.termCount;
  const atOnce = Math.min(shape.permutations, Math.ceil(cachedSums / sumsPerPermutation));
  const sums = new Float64Array(atOnce * sumsPerPermutation);
  const values = new Float64Array(atOnce * featureCount);
  const jWindow = new Float32Array(2 * layout.samplesPerEpoch);
  const kWindow = new Float32Array(2 * layout.samplesPerEpoch);
  const window: ShiftedWindow = {
    frequencyCount,
    sampleCount,
    keptSamples,
    shifts: new Uint16Array(run.draws),
    jShift: 0,
    kShift: 0,
    shiftStride: siteCount * epochCount,
    permutations: 0,
  };

  function sumCondition(j: number, k: number, from: number, epochs: number, first: number): void {
    sums.fill(0);
    for (let n = from; n < from + epochs; n++) {
      sampleMajor(run, j, n, jWindow);
      sampleMajor(run, k, n, kWindow);
      window.jShift = (first * siteCount + j) * epochCount + n;
      window.kShift = (first * siteCount + k) * epochCount + n;
      measure.addShiftedTerms(jWindow, kWindow, sums, window);
    }
  }

  return {
    surrogates(j, k, range, first, second) {
      for (let p = range.from; p < range.to; p += atOnce) {
        const part = { from: p, to: Math.min(range.to, p + atOnce) };
        window.permutations = part.to - part.from;
        for (const [from, epochs, out] of [
          [0, shape.epochsA, first],
          [shape.epochsA, shape.epochsB, second],
        ] as const) {
          sumCondition(j, k, from, epochs, p);
          measure.values(sums, epochs, values, window.permutations * featureCount);
          store(values, part, run, out, (p - range.from) * featureCount);
        }
      }
    },
  };
}

/** Copies one epoch of one site from `[part][frequency][sample]` to `[sample][frequency][part]`. */
function sampleMajor(run: RunInput, site: number, epoch: number, out: Float32Array): void {
  const { phasors, layout } = run;
  const { frequencyCount, samplesPerFrequency, samplesPerEpoch } = layout;
  const start = (site * layout.epochCount + epoch) * 2 * samplesPerEpoch;
  for (let f = 0; f < frequencyCount; f++) {
    const re = start + f * samplesPerFrequency;
    const im = re + samplesPerEpoch;
    let at = 2 * f;
    for (let s = 0; s < samplesPerFrequency; s++, at += 2 * frequencyCount) {
      out[at] = phasors[re + s];
      out[at + 1] = phasors[im + s];
    }
  }
}

/** Values come `[permutation][t][f]`; surrogates are `[permutation][f][t]`. */
function store(
  values: Float64Array,
  range: PermutationRange,
  run: RunInput,
  out: Float32Array,
  at: number,
): void {
  const { frequencyCount, keptSamples } = run.layout;
  const timeCount = keptSamples.length;
  for (let p = 0; p < range.to - range.from; p++) {
    const row = p * run.featureCount;
    for (let t = 0; t < timeCount; t++) {
      for (let f = 0; f < frequencyCount; f++) {
        out[at + row + f * timeCount + t] = values[row + t * frequencyCount + f];
      }
    }
  }
}
