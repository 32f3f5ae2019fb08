/**
 * What ISPC does without any synchrony: the N unit vectors point anywhere. R^2 is then close to
 * exponential with mean 1/N (Rayleigh), good from about 10 epochs on.
 */

/** Expected ISPC of N epochs by chance, sqrt(pi / 4N); 1 for a single epoch. */
export function chanceIspc(epochs: number): number {
  return epochs < 2 ? 1 : Math.sqrt(Math.PI / (4 * epochs));
}

/**
 * ISPC that chance alone passes with probability p, sqrt(-ln p / N), for one test. The
 * approximation is conservative; it leaves [0, 1] at few epochs and is then 1.
 */
export function criticalIspc(epochs: number, p: number): number {
  return Math.min(1, Math.sqrt(-Math.log(p) / epochs));
}

/** Sd of the difference of two ISPC by chance, sqrt((1 - pi/4)(1/nA + 1/nB)). */
export function differenceSd(epochsA: number, epochsB: number): number {
  return Math.sqrt((1 - Math.PI / 4) * (1 / epochsA + 1 / epochsB));
}
