import {
  addToMoments,
  finishMoments,
  newNullSums,
  type NullSums,
} from '../../kernels/null-moments';
import { ties } from '../ties';
import type { NullModel, RunInput } from './model';
import { PairSurrogates } from './pair-surrogates';

/** Mean and sd of each feature's null. */
export interface Moments {
  mean: Float64Array;
  sd: Float64Array;
}

/**
 * The statistic of one pair: the difference of the measure, or the difference of each condition's z
 * against its own surrogates (numerics, section 5). Values are rounded to f32, as the surrogates'.
 */
export interface PairStatistic {
  surrogates: PairSurrogates;
  /** Tolerance within which two statistics are equal. */
  tolerance: number;
  /**
   * Takes up a pair; writes the statistic of the observed measures. Must be called before the
   * surrogates are visited.
   */
  begin(
    pair: { j: number; k: number },
    observedA: Float64Array,
    observedB: Float64Array,
    statistic: Float64Array,
  ): void;
}

export function pairStatistic(model: NullModel, run: RunInput, limit?: number): PairStatistic {
  return model.statistic === 'difference'
    ? measureDifference(model, run, limit)
    : zDifference(model, run, limit);
}

function measureDifference(model: NullModel, run: RunInput, limit?: number): PairStatistic {
  const surrogates = new PairSurrogates(model.sampler(run), sizeOf(run), null, limit);
  return {
    surrogates,
    tolerance: ties.measure,
    begin({ j, k }, observedA, observedB, statistic) {
      surrogates.begin(j, k);
      for (let x = 0; x < statistic.length; x++) {
        statistic[x] = Math.fround(observedA[x] - observedB[x]);
      }
    },
  };
}

function zDifference(model: NullModel, run: RunInput, limit?: number): PairStatistic {
  const a = newMoments(run.featureCount);
  const b = newMoments(run.featureCount);
  const combine = (first: Float32Array, second: Float32Array) => {
    for (let at = 0; at < first.length; at += run.featureCount) {
      for (let x = 0; x < run.featureCount; x++) {
        first[at + x] = differenceOfZ(first[at + x], second[at + x], a, b, x);
      }
    }
  };
  const surrogates = new PairSurrogates(model.sampler(run), sizeOf(run), combine, limit);
  const sums = { a: newNullSums(run.featureCount), b: newNullSums(run.featureCount) };
  return {
    surrogates,
    tolerance: ties.z,
    begin({ j, k }, observedA, observedB, statistic) {
      surrogates.begin(j, k);
      conditionMoments(surrogates, run, sums, a, b);
      for (let x = 0; x < statistic.length; x++) {
        const rounded = differenceOfZ(
          Math.fround(observedA[x]),
          Math.fround(observedB[x]),
          a,
          b,
          x,
        );
        statistic[x] = Math.fround(rounded);
      }
    },
  };
}

function conditionMoments(
  surrogates: PairSurrogates,
  run: RunInput,
  sums: { a: NullSums; b: NullSums },
  a: Moments,
  b: Moments,
): void {
  const { permutations } = run.shape;
  surrogates.raw((first, second, range) => {
    const start = range.from === 0;
    addToMoments(first, range.to - range.from, run.featureCount, sums.a, start);
    addToMoments(second, range.to - range.from, run.featureCount, sums.b, start);
  });
  finishMoments(sums.a, permutations, ties.zeroSd, a.mean, a.sd);
  finishMoments(sums.b, permutations, ties.zeroSd, b.mean, b.sd);
}

/** z_A - z_B; 0 where the null of either condition has no spread: there is no z to compare. */
function differenceOfZ(
  valueA: number,
  valueB: number,
  a: Moments,
  b: Moments,
  feature: number,
): number {
  const sdA = a.sd[feature];
  const sdB = b.sd[feature];
  if (sdA === 0 || sdB === 0) return 0;
  return (valueA - a.mean[feature]) / sdA - (valueB - b.mean[feature]) / sdB;
}

export function newMoments(featureCount: number): Moments {
  return { mean: new Float64Array(featureCount), sd: new Float64Array(featureCount) };
}

function sizeOf(run: RunInput) {
  return { permutations: run.shape.permutations, featureCount: run.featureCount };
}
