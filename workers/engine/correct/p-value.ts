import type { Tail } from '../plan';
import { clopperPearson } from './clopper-pearson';

/** Of permutation tests: one p with its 95 % Monte Carlo interval. */
export interface MonteCarloP {
  p: number;
  interval: [number, number];
}

/**
 * p = (1 + b) / (1 + m) for b exceedances of m permutations; never zero, since the identity is one
 * of the permutations. Source: Phipson and Smyth 2010.
 */
export function permutationP(exceedances: number, permutations: number): number {
  return (1 + exceedances) / (1 + permutations);
}

/** p by tail from the count of `tailExceedances`; two-sided is twice the smaller, at most 1. */
export function tailP(exceedances: number, permutations: number, tail: Tail): number {
  const p = permutationP(exceedances, permutations);
  return tail === 'two-sided' ? Math.min(1, 2 * p) : p;
}

/** The same with the Clopper-Pearson interval of the count, doubled for two-sided. */
export function tailPWithInterval(
  exceedances: number,
  permutations: number,
  tail: Tail,
): MonteCarloP {
  const [low, high] = clopperPearson(exceedances, permutations);
  const sides = tail === 'two-sided' ? 2 : 1;
  return {
    p: tailP(exceedances, permutations, tail),
    interval: [Math.min(1, sides * low), Math.min(1, sides * high)],
  };
}

/**
 * Whether p is at most alpha. The tolerance is for p that were rounded to f32 on the way; it is far
 * finer than the steps of any p here.
 */
export function passes(p: number, alpha: number): boolean {
  return p <= alpha * (1 + 1e-6);
}

/** Most exceedances that still give p <= alpha; -1 where none does (too few permutations). */
export function mostExceedances(alpha: number, permutations: number): number {
  return Math.floor(alpha * (permutations + 1) * (1 + 1e-6)) - 1;
}
