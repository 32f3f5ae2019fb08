import type { GroupDesign } from './design';

/** Beyond this |t| the values are equal to rounding: kept finite, and all such count as tied. */
export const largestT = 1000;

/** A variance below this share of the mean square is rounding. */
const noVariance = 1e-12;

/** t over participants of the features of one pair, under any relabelling. */
export interface GroupStatistic {
  /** `marks[i]` as relabellings.ts has it. Writes t and, where asked for, the means behind it. */
  write(marks: ArrayLike<number>, t: Float64Array, means?: GroupMeans): void;
}

export interface GroupMeans {
  /** Paired: the mean of all; between: of the first group. */
  first: Float32Array;
  /** Paired: 0; between: of the second group. */
  second: Float32Array;
  standardError: Float32Array;
}

/**
 * Layout: `values[participant * featureCount + feature]`. Allocates three rows; `write` nothing.
 * Policy: t is 0 where every value is 0, and never beyond `largestT`.
 * Cost of `write`: participants times features.
 * Source: Student 1908 (one sample, and two with pooled variance); Welch 1938 (unequal).
 */
export function groupStatistic(
  design: GroupDesign,
  values: Float64Array,
  featureCount: number,
): GroupStatistic {
  const count = values.length / featureCount;
  return design.kind === 'paired'
    ? oneSample(values, count, featureCount)
    : twoSamples(values, count, featureCount, design);
}

function oneSample(values: Float64Array, count: number, featureCount: number): GroupStatistic {
  const squares = squaresOf(values, featureCount);
  const sums = new Float64Array(featureCount);
  return {
    write(marks, t, means) {
      sums.fill(0);
      for (let i = 0; i < count; i++) {
        const sign = marks[i] ? -1 : 1;
        const row = i * featureCount;
        for (let x = 0; x < featureCount; x++) sums[x] += sign * values[row + x];
      }
      for (let x = 0; x < featureCount; x++) {
        const mean = sums[x] / count;
        const variance = (squares[x] - sums[x] * mean) / (count - 1);
        t[x] = tOf(mean, variance / count, squares[x] / count);
        if (means) store(means, x, mean, 0, variance / count);
      }
    },
  };
}

function twoSamples(
  given: Float64Array,
  count: number,
  featureCount: number,
  { variance, inFirst }: Extract<GroupDesign, { kind: 'between' }>,
): GroupStatistic {
  const firstCount = inFirst.filter(Boolean).length;
  const secondCount = count - firstCount;
  // Sums about the common mean lose least to rounding; t does not change by it.
  const centre = meansOf(given, count, featureCount);
  const values = given.map((value, i) => value - centre[i % featureCount]);
  const squares = squaresOf(values, featureCount);
  const [sum, square] = [new Float64Array(featureCount), new Float64Array(featureCount)];
  return {
    write(marks, t, means) {
      sum.fill(0);
      square.fill(0);
      for (let i = 0; i < count; i++) {
        if (!marks[i]) continue;
        const row = i * featureCount;
        for (let x = 0; x < featureCount; x++) {
          const value = values[row + x];
          sum[x] += value;
          square[x] += value * value;
        }
      }
      for (let x = 0; x < featureCount; x++) {
        const [first, second] = [sum[x] / firstCount, -sum[x] / secondCount];
        const withinFirst = square[x] - sum[x] * first;
        const withinSecond = squares[x] - square[x] + sum[x] * second;
        const error =
          variance === 'pooled'
            ? ((withinFirst + withinSecond) / (count - 2)) * (1 / firstCount + 1 / secondCount)
            : withinFirst / (firstCount - 1) / firstCount +
              withinSecond / (secondCount - 1) / secondCount;
        t[x] = tOf(first - second, error, squares[x] / count);
        if (means) store(means, x, first + centre[x], second + centre[x], error);
      }
    },
  };
}

/** t from a mean, its squared standard error, and the mean square that says what rounding is. */
function tOf(mean: number, squaredError: number, meanSquare: number): number {
  if (squaredError > noVariance * meanSquare) {
    const t = mean / Math.sqrt(squaredError);
    return Math.max(-largestT, Math.min(largestT, t));
  }
  return mean * mean > noVariance * meanSquare ? Math.sign(mean) * largestT : 0;
}

function store(means: GroupMeans, x: number, first: number, second: number, error: number): void {
  means.first[x] = first;
  means.second[x] = second;
  means.standardError[x] = Math.sqrt(Math.max(0, error));
}

function meansOf(values: Float64Array, count: number, featureCount: number): Float64Array {
  const means = new Float64Array(featureCount);
  values.forEach((value, i) => (means[i % featureCount] += value / count));
  return means;
}

function squaresOf(values: Float64Array, featureCount: number): Float64Array {
  const squares = new Float64Array(featureCount);
  values.forEach((value, i) => (squares[i % featureCount] += value * value));
  return squares;
}
