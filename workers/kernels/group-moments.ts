import { groupFeatures } from './group';

/** Running sums and counts of eight features. `origin` is the first row: it keeps squares small. */
export interface GroupSums {
  origin: Float64Array;
  sum: Float64Array;
  squares: Float64Array;
  /** Smallest f32 that is at least the observed statistic less the tolerance; and the mirror of it. */
  upperFrom: Float32Array;
  lowerTo: Float32Array;
  upper: Uint32Array;
  lower: Uint32Array;
}

/**
 * Adds surrogates of eight features to their running sums, and counts those at least as large and
 * at most as small as the observed statistic.
 * Layout: `values[row * 8 + feature]`, rows in order of permutation; the first rows of a null come
 * with `start` true, which clears the sums. Mutates `sums`; allocates nothing; sums in f64.
 * Cost: three additions, a product and two comparisons a value.
 * Source: Phipson and Smyth 2010 (the counts behind p = (1 + b) / (1 + m)).
 */
export function addGroupMoments(
  values: Float32Array,
  sums: GroupSums,
  rows: number,
  start: boolean,
): void {
  const { origin, sum, squares, upperFrom, lowerTo, upper, lower } = sums;
  for (let x = 0; x < groupFeatures; x++) {
    if (start) {
      origin[x] = values[x];
      sum[x] = squares[x] = upper[x] = lower[x] = 0;
    }
    for (let at = x; at < rows * groupFeatures; at += groupFeatures) {
      const away = values[at] - origin[x];
      sum[x] += away;
      squares[x] += away * away;
      if (values[at] >= upperFrom[x]) upper[x]++;
      if (values[at] <= lowerTo[x]) lower[x]++;
    }
  }
}

const asFloat = new Float32Array(1);
const asInteger = new Int32Array(asFloat.buffer);

/** The smallest f32 that is at least `value`: f32 numbers compare with it as with the value. */
export function leastFloatFrom(value: number): number {
  asFloat[0] = value;
  if (asFloat[0] >= value) return asFloat[0];
  if (asFloat[0] === 0) return 2 ** -149;
  asInteger[0] += asFloat[0] > 0 ? 1 : -1;
  return asFloat[0];
}

/** The largest f32 that is at most `value`. */
export function mostFloatTo(value: number): number {
  return -leastFloatFrom(-value);
}
