import { gammaln } from 'simple-statistics';

/** ln(n!), exact to rounding. */
export function logFactorial(n: number): number {
  return n < 2 ? 0 : gammaln(n + 1);
}

/** ln of the number of ways to choose k of n; minus infinity where there is none. */
export function logChoose(n: number, k: number): number {
  if (k < 0 || k > n) return -Infinity;
  return logFactorial(n) - logFactorial(k) - logFactorial(n - k);
}
