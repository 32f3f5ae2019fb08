import {
  labelBlockCount,
  labelLanes,
  labelTableLength,
  sumLabelled,
  tabulateSubsets,
} from '../../kernels/label-sums';
import type { PairSampler, PermutationRange, RunInput } from './model';

/** Terms of all epochs that are held at once, elements of f64 (16 MB). */
const heldTerms = 2 ** 21;

/**
 * Surrogates of relabelled epochs: for a few features at a time, the terms of every subset of 7
 * epochs are tabulated, and each permutation adds one entry a block. B is the total minus A.
 */
export class LabelSampler implements PairSampler {
  private readonly masks: Uint8Array;
  /** Features whose terms fill the lanes of a table. */
  private readonly groupFeatures: number;
  /** Features whose terms are held at once, a multiple of a group. */
  private readonly chunkFeatures: number;
  /** `[epoch][feature of the chunk][term]`. */
  private readonly terms: Float64Array;
  private readonly table: Float64Array;
  /** `[permutation][feature of the group][term]`. */
  private readonly sums: Float64Array;
  private readonly valuesA: Float64Array;
  private readonly valuesB: Float64Array;

  constructor(private readonly run: RunInput) {
    const { termCount } = run.measure;
    const { permutations } = run.shape;
    const { epochCount } = run.layout;
    this.masks = new Uint8Array(run.draws);
    this.groupFeatures = Math.floor(labelLanes / termCount);
    const groups = Math.floor(heldTerms / (epochCount * termCount * this.groupFeatures));
    this.chunkFeatures = Math.min(run.featureCount, Math.max(1, groups) * this.groupFeatures);
    this.terms = new Float64Array(epochCount * this.chunkFeatures * termCount);
    this.table = new Float64Array(labelTableLength(epochCount));
    // The last permutation writes all lanes, also those that no feature of the group uses.
    this.sums = new Float64Array(permutations * this.groupFeatures * termCount + labelLanes);
    this.valuesA = new Float64Array(permutations * this.groupFeatures);
    this.valuesB = new Float64Array(permutations * this.groupFeatures);
  }

  surrogates(j: number, k: number, range: PermutationRange, first: Float32Array): void {
    const { featureCount } = this.run;
    for (let chunk = 0; chunk < featureCount; chunk += this.chunkFeatures) {
      const features = Math.min(this.chunkFeatures, featureCount - chunk);
      this.fillTerms(j, k, chunk, features);
      for (let at = 0; at < features; at += this.groupFeatures) {
        const lanes = Math.min(this.groupFeatures, features - at);
        this.sumGroup(at, lanes, features, range);
        this.store(chunk + at, lanes, range.to - range.from, first);
      }
    }
  }

  /** Terms of each epoch by itself. */
  private fillTerms(j: number, k: number, feature: number, features: number): void {
    const { measure, phasors, layout } = this.run;
    const { epochCount, samplesPerEpoch } = layout;
    const stride = features * measure.termCount;
    const jStart = new Int32Array(1);
    const kStart = new Int32Array(1);
    const rows = { epochCount: 1, sampleCount: features, partDistance: samplesPerEpoch };
    for (let n = 0; n < epochCount; n++) {
      jStart[0] = (j * epochCount + n) * 2 * samplesPerEpoch + feature;
      kStart[0] = (k * epochCount + n) * 2 * samplesPerEpoch + feature;
      const row = this.terms.subarray(n * stride, (n + 1) * stride);
      measure.sumTerms(phasors, jStart, kStart, row, rows);
    }
  }

  /** Values of A and of B of one group of features, `[permutation][feature of the group]`. */
  private sumGroup(at: number, lanes: number, features: number, range: PermutationRange): void {
    const { measure, shape, layout } = this.run;
    const { termCount } = measure;
    const { epochCount } = layout;
    const { terms, table, sums } = this;
    const count = range.to - range.from;
    const outStride = this.groupFeatures * termCount;
    const place = { epochCount, termStride: features * termCount };
    tabulateSubsets(terms, at * termCount, lanes * termCount, table, place);
    sumLabelled(table, this.masks, sums, range, { blocks: labelBlockCount(epochCount), outStride });
    measure.values(sums, shape.epochsA, this.valuesA, count * this.groupFeatures);
    complement(sums, totals(terms, at * termCount, lanes * termCount, place), outStride, count);
    measure.values(sums, shape.epochsB, this.valuesB, count * this.groupFeatures);
  }

  private store(feature: number, lanes: number, count: number, out: Float32Array): void {
    const { featureCount } = this.run;
    const { valuesA, valuesB, groupFeatures } = this;
    for (let p = 0; p < count; p++) {
      const from = p * groupFeatures;
      const to = p * featureCount + feature;
      for (let i = 0; i < lanes; i++) out[to + i] = valuesA[from + i] - valuesB[from + i];
    }
  }
}

function totals(
  terms: Float64Array,
  first: number,
  lanes: number,
  { epochCount, termStride }: { epochCount: number; termStride: number },
): Float64Array {
  const total = new Float64Array(lanes);
  for (let n = 0; n < epochCount; n++) {
    for (let lane = 0; lane < lanes; lane++) total[lane] += terms[n * termStride + first + lane];
  }
  return total;
}

/** Turns the sums of A into those of B, in place. */
function complement(sums: Float64Array, total: Float64Array, stride: number, count: number): void {
  for (let p = 0; p < count; p++) {
    for (let lane = 0; lane < total.length; lane++) {
      sums[p * stride + lane] = total[lane] - sums[p * stride + lane];
    }
  }
}
