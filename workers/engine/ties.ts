/**
 * When two statistics count as equal. Balanced groups and symmetric statistics make equal values
 * that rounding tells apart; every implementation, f64 or f32, compares with these tolerances, so
 * that all of them count the same (kernels, pitfall 2). An f32 sum of some hundred unit vectors
 * errs by less than 4e-6 of the measure; the shift this makes in a p is far below its Monte Carlo
 * error, and always towards caution.
 */
export const ties = {
  /** Differences of a measure: s_p >= s when s_p >= s - measure. */
  measure: 1e-5,
  /** Statistics in z units: z differences, and maxima over features. */
  z: 1e-4,
  /** Cluster masses, relative. */
  mass: 1e-5,
  /**
   * A null sd at or below this is zero: all surrogates are equal to rounding. Policy: such a
   * feature has z = 0 and p = 1, and is counted, never NaN.
   */
  zeroSd: 1e-6,
} as const;
