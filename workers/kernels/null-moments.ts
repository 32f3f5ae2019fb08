/** Running sums of a null, by feature: of values less `origin`, the first one, to keep squares small. */
export interface NullSums {
  origin: Float64Array;
  sum: Float64Array;
  squares: Float64Array;
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
