import {
  labelBlockCount,
  labelLanes,
  labelTableLength,
  sumLabelled,
  tabulateSubsets,
} from '../../kernels/label-sums';
import type { PairSampler, PermutationRange, RunInput } from './model';

/**
 * Surrogates of relabelled epochs: for a few features at a time, the terms of every subset of 7
 * epochs are tabulated, and each permutation adds one entry a block. B is the total minus A.
 */
export function labelSampler(run: RunInput): PairSampler {
  const { measure, shape, featureCount } = run;
  const { termCount } = measure;
  const { epochsA, epochsB, permutations } = shape;
  const epochCount = epochsA + epochsB;
  const blocks = labelBlockCount(epochCount);
  const masks = new Uint8Array(run.draws);
  const termStride = featureCount * termCount;
  const terms = new Float64Array(epochCount * termStride);
  const table = new Float64Array(labelTableLength(epochCount));
  const groupFeatures = Math.floor(labelLanes / termCount);
  const outStride = groupFeatures * termCount;
  // The last permutation writes all lanes, also those that no feature of the group uses.
  const sums = new Float64Array(permutations * outStride + labelLanes);
  const valuesA = new Float64Array(permutations * groupFeatures);
  const valuesB = new Float64Array(permutations * groupFeatures);

  function group(feature: number, features: number, range: PermutationRange, out: Float32Array) {
    const count = range.to - range.from;
    const first = feature * termCount;
    tabulateSubsets(terms, first, features * termCount, table, { epochCount, termStride });
    sumLabelled(table, masks, sums, range, { blocks, outStride });
    measure.values(sums, epochsA, valuesA, count * groupFeatures);
    complement(
      sums,
      totals(terms, first, features * termCount, epochCount, termStride),
      outStride,
      count,
    );
    measure.values(sums, epochsB, valuesB, count * groupFeatures);
    for (let p = 0; p < count; p++) {
      for (let i = 0; i < features; i++) {
        const at = p * groupFeatures + i;
        out[p * featureCount + feature + i] = valuesA[at] - valuesB[at];
      }
    }
  }

  return {
    surrogates(j, k, range, first) {
      epochTerms(run, j, k, terms);
      for (let feature = 0; feature < featureCount; feature += groupFeatures) {
        group(feature, Math.min(groupFeatures, featureCount - feature), range, first);
      }
    },
  };
}

/** Terms of each epoch by itself, `terms[epoch][feature][term]`. */
function epochTerms(run: RunInput, j: number, k: number, terms: Float64Array): void {
  const { epochCount, samplesPerEpoch } = run.layout;
  const termStride = run.featureCount * run.measure.termCount;
  const jStart = new Int32Array(1);
  const kStart = new Int32Array(1);
  for (let n = 0; n < epochCount; n++) {
    jStart[0] = (j * epochCount + n) * 2 * samplesPerEpoch;
    kStart[0] = (k * epochCount + n) * 2 * samplesPerEpoch;
    const row = terms.subarray(n * termStride, (n + 1) * termStride);
    run.measure.sumTerms(run.phasors, jStart, kStart, row, { epochCount: 1, samplesPerEpoch });
  }
}

function totals(
  terms: Float64Array,
  first: number,
  lanes: number,
  epochCount: number,
  termStride: number,
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
