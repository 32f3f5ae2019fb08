/** Running sums of a null, by feature. `origin` is the first surrogate: it keeps the squares small. */
export interface NullSums {
  origin: Float64Array;
  sum: Float64Array;
  squares: Float64Array;
}

export function newNullSums(featureCount: number): NullSums {
  return {
    origin: new Float64Array(featureCount),
    sum: new Float64Array(featureCount),
    squares: new Float64Array(featureCount),
  };
}

/**
 * Adds surrogates to the running sums of each feature.
 * Layout: `values[row * featureCount + feature]`, rows in order of permutation number; the very
 * first row of a null must come with `first` true and sets the origin.
 * Mutates `sums`; allocates nothing. Cost: two additions and a product a value, in f64.
 */
export function addToMoments(
  values: Float32Array,
  rows: number,
  featureCount: number,
  sums: NullSums,
  first: boolean,
): void {
  const { origin, sum, squares } = sums;
  if (first) {
    for (let x = 0; x < featureCount; x++) origin[x] = values[x];
    sum.fill(0);
    squares.fill(0);
  }
  let at = 0;
  for (let row = 0; row < rows; row++) {
    for (let x = 0; x < featureCount; x++, at++) {
      const away = values[at] - origin[x];
      sum[x] += away;
      squares[x] += away * away;
    }
  }
}

/**
 * Mean and standard deviation (P - 1) of each feature's null from its running sums. An sd at or
 * below `zeroSd` is returned as exactly 0. Writes `mean` and `sd`; allocates nothing.
 */
export function finishMoments(
  sums: NullSums,
  permutations: number,
  zeroSd: number,
  mean: Float64Array,
  sd: Float64Array,
): void {
  const { origin, sum, squares } = sums;
  for (let x = 0; x < sum.length; x++) {
    const away = sum[x] / permutations;
    const variance = (squares[x] - sum[x] * away) / (permutations - 1);
    const spread = Math.sqrt(Math.max(0, variance));
    mean[x] = origin[x] + away;
    sd[x] = spread > zeroSd ? spread : 0;
  }
}
