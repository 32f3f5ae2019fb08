import { correctionOf } from '../correct/registry';
import type { Plan } from '../plan';

export interface EpochCounts {
  a: number;
  b: number;
}

/**
 * The smallest uncorrected p the test can give: 1/(P+1), twice that when two-sided
 * (Phipson and Smyth 2010), and no smaller than the share of one among all arrangements.
 */
export function smallestP(test: Plan['test'], logArrangementCount: number): number {
  const one = Math.max(1 / (test.permutations + 1), Math.exp(-logArrangementCount));
  return Math.min(1, test.tail === 'two-sided' ? 2 * one : one);
}

/**
 * The smallest corrected p: maxima over the map are compared in the plan's tail already, so they
 * count once; false discovery rates start from the uncorrected p, when all tests reach it together.
 * Where every arrangement has a twin of opposite sign (labels of two conditions of equal size), a
 * two-sided maximum is always met twice among all of them.
 */
export function smallestAdjustedP(
  test: Plan['test'],
  correction: Plan['test']['corrections'][number],
  logArrangementCount: number,
  hasTwins: boolean,
): number {
  if (correctionOf(correction).family === 'false discovery') {
    return smallestP(test, logArrangementCount);
  }
  const share = Math.exp(-logArrangementCount) * (hasTwins && test.tail === 'two-sided' ? 2 : 1);
  return Math.min(1, Math.max(1 / (test.permutations + 1), share));
}

/**
 * How many tests must reach the smallest p together before a false discovery rate can claim one;
 * more than there are where none can. `inflation` is 1 for Benjamini-Hochberg.
 */
export function togetherForFalseDiscovery(
  test: Plan['test'],
  tests: number,
  p: number,
  inflation = 1,
): number {
  return Math.max(1, Math.ceil((inflation * p * tests) / test.alpha - 1e-9));
}
