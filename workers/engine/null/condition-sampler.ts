import type { PairSampler, RunInput } from './model';

/** One condition of one pair under one permutation: what to sum, and where to put it. */
export interface ConditionTask {
  j: number;
  k: number;
  permutation: number;
  /** First epoch of the condition, and how many it has. */
  from: number;
  epochs: number;
  /** Out: `[feature][term]`. */
  sums: Float64Array;
  /** Scratch, one entry an epoch. */
  jStarts: Int32Array;
  kStarts: Int32Array;
}

/**
 * A sampler for nulls that shuffle within each condition: it asks for the sums of A and of B under
 * each permutation and stores the measure of both.
 */
export function conditionSampler(run: RunInput, sum: (task: ConditionTask) => void): PairSampler {
  const { measure, shape, featureCount } = run;
  const { epochsA, epochsB } = shape;
  const most = Math.max(epochsA, epochsB);
  const values = new Float64Array(featureCount);
  const task: ConditionTask = {
    j: 0,
    k: 0,
    permutation: 0,
    from: 0,
    epochs: 0,
    sums: new Float64Array(featureCount * measure.termCount),
    jStarts: new Int32Array(most),
    kStarts: new Int32Array(most),
  };
  const make = (from: number, epochs: number, out: Float32Array, at: number) => {
    task.from = from;
    task.epochs = epochs;
    sum(task);
    measure.values(task.sums, epochs, values, featureCount);
    out.set(values, at);
  };
  return {
    surrogates(j, k, range, first, second) {
      task.j = j;
      task.k = k;
      for (let p = range.from; p < range.to; p++) {
        const at = (p - range.from) * featureCount;
        task.permutation = p;
        make(0, epochsA, first, at);
        make(epochsA, epochsB, second, at);
      }
    },
  };
}
