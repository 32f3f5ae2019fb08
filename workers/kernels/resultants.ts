/**
 * Resultant lengths of groups of unit vectors.
 * Layout: `sums[i * 2]` real, `sums[i * 2 + 1]` imaginary; `values[i]`.
 * Returns nothing; writes `values[0 .. count)`, in 0 .. 1, no unit. Allocates nothing.
 * Cost: one square root each. Source: Lachaux et al. 1999, the phase-locking value.
 * @example resultantLengths(Float64Array.of(3, 4), 10, values, 1) // values[0] = 0.5
 */
export function resultantLengths(
  sums: Float64Array,
  epochCount: number,
  values: Float64Array,
  count: number,
): void {
  for (let i = 0; i < count; i++) {
    const re = sums[2 * i];
    const im = sums[2 * i + 1];
    // Rounding may carry equal phases a last bit above 1.
    values[i] = Math.min(1, Math.sqrt(re * re + im * im) / epochCount);
  }
}
