/** A null distribution, ready for counting: its values in ascending order. */
export function ascending(values: Float32Array): Float64Array {
  return Float64Array.from(values).sort();
}

/** How many values of an ascending list are at least `bound`. */
export function countAtLeast(sorted: Float64Array, bound: number): number {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle] >= bound) high = middle;
    else low = middle + 1;
  }
  return sorted.length - low;
}

/**
 * The value that an observed maximum must leave behind when at most `most` permutations may reach
 * it; null where `most` is negative.
 */
export function criticalOf(sorted: Float64Array, most: number): number | null {
  return most < 0 ? null : sorted[Math.max(0, sorted.length - 1 - most)];
}

/** Middle value; 0 of an empty list. */
export function median(values: Float32Array): number {
  if (values.length === 0) return 0;
  const sorted = ascending(values);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}
