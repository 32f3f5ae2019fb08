import { nullModelOf, type NullId } from './registry';

/**
 * What a contrast under this null must not be read as; null where it tests the difference itself.
 * Two sites equally synchronous in A and B, ISPC 0.15 to 0.45, 60 epochs each: alpha 0.05 gave 0.13
 * claims under trial-shuffling (2,000 simulated pairs a value; COMP, NumPy), and 0.05 without
 * synchrony.
 */
export function nullCaution(id: NullId): string | null {
  if (nullModelOf(id).statistic === 'difference') return null;
  return 'These surrogates hold no synchrony in either condition. Sites that are equally synchronous in A and B, as volume conduction and a shared reference make them, differ by chance more than the surrogates do, so alpha is exceeded there. To claim that A and B differ, use condition labels.';
}
