/**
 * Counts, for each feature, the surrogates at least as large and at most as small as the observed
 * statistic; values within the tolerance count both ways.
 * Layout: `values[row * featureCount + feature]`, `observed[feature]`.
 * Adds to `upper` and `lower`; allocates nothing. Cost: two comparisons a value.
 * Source: Phipson and Smyth 2010 (the counts behind p = (1 + b) / (1 + m)).
 * @example countExceedances(Float32Array.of(1, 2, 3), 3, Float64Array.of(2), counts, 1e-5)
 * // upper 2, lower 2
 */
export function countExceedances(
  values: Float32Array,
  rows: number,
  observed: Float64Array,
  counts: { upper: Uint32Array; lower: Uint32Array },
  tolerance: number,
): void {
  const { upper, lower } = counts;
  const featureCount = observed.length;
  let at = 0;
  for (let row = 0; row < rows; row++) {
    for (let x = 0; x < featureCount; x++, at++) {
      const above = values[at] - observed[x];
      if (above >= -tolerance) upper[x]++;
      if (above <= tolerance) lower[x]++;
    }
  }
}
