import type { ShiftedWindow } from '../measure/measure';
import type { PairSampler, PermutationRange, RunInput } from './model';

/** Running sums that stay in a core's cache, elements of f64. */
const cachedSums = 2 ** 17;

/**
 * Surrogates of windows rotated in time. Epoch after epoch is laid out so that a shift moves whole
 * rows, and is added to the sums of some hundred permutations at once: each epoch's window then
 * stays in cache while it is used.
 */
export class ShiftSampler implements PairSampler {
  /** Permutations summed at once. */
  private readonly atOnce: number;
  /** `[permutation][time][frequency][term]`. */
  private readonly sums: Float64Array;
  private readonly values: Float64Array;
  private readonly jWindow: Float32Array;
  private readonly kWindow: Float32Array;
  private readonly window: ShiftedWindow;

  constructor(private readonly run: RunInput) {
    const { measure, layout, shape, featureCount } = run;
    const sumsPerPermutation = featureCount * measure.termCount;
    this.atOnce = Math.min(shape.permutations, Math.ceil(cachedSums / sumsPerPermutation));
    this.sums = new Float64Array(this.atOnce * sumsPerPermutation);
    this.values = new Float64Array(this.atOnce * featureCount);
    this.jWindow = new Float32Array(2 * layout.samplesPerEpoch);
    this.kWindow = new Float32Array(2 * layout.samplesPerEpoch);
    this.window = {
      frequencyCount: layout.frequencyCount,
      sampleCount: layout.samplesPerFrequency,
      keptSamples: layout.keptSamples,
      shifts: new Uint16Array(run.draws),
      jShift: 0,
      kShift: 0,
      shiftStride: layout.siteCount * layout.epochCount,
      permutations: 0,
    };
  }

  surrogates(
    j: number,
    k: number,
    range: PermutationRange,
    first: Float32Array,
    second: Float32Array,
  ): void {
    const { epochsA, epochsB } = this.run.shape;
    for (let p = range.from; p < range.to; p += this.atOnce) {
      const part = { from: p, to: Math.min(range.to, p + this.atOnce) };
      const at = (p - range.from) * this.run.featureCount;
      this.condition(j, k, part, { from: 0, epochs: epochsA }, first, at);
      this.condition(j, k, part, { from: epochsA, epochs: epochsB }, second, at);
    }
  }

  private condition(
    j: number,
    k: number,
    part: PermutationRange,
    { from, epochs }: { from: number; epochs: number },
    out: Float32Array,
    at: number,
  ): void {
    const { measure, layout, featureCount } = this.run;
    const { siteCount, epochCount } = layout;
    const { sums, values, window, jWindow, kWindow } = this;
    window.permutations = part.to - part.from;
    sums.fill(0);
    for (let n = from; n < from + epochs; n++) {
      sampleMajor(this.run, j, n, jWindow);
      sampleMajor(this.run, k, n, kWindow);
      window.jShift = (part.from * siteCount + j) * epochCount + n;
      window.kShift = (part.from * siteCount + k) * epochCount + n;
      measure.addShiftedTerms(jWindow, kWindow, sums, window);
    }
    measure.values(sums, epochs, values, window.permutations * featureCount);
    store(values, window, out, at);
  }
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
function store(values: Float64Array, window: ShiftedWindow, out: Float32Array, at: number): void {
  const { frequencyCount, permutations } = window;
  const timeCount = window.keptSamples.length;
  const featureCount = frequencyCount * timeCount;
  for (let row = 0; row < permutations * featureCount; row += featureCount) {
    for (let t = 0; t < timeCount; t++) {
      for (let f = 0; f < frequencyCount; f++) {
        out[at + row + f * timeCount + t] = values[row + t * frequencyCount + f];
      }
    }
  }
}
