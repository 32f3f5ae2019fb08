/**
 * What a measure does without any synchrony: the N unit vectors point anywhere. R^2 is then close to
 * exponential with mean 1/N (Rayleigh), good from about 10 epochs on.
 */
export interface ChanceLevels {
  /** Expected value of N epochs by chance. */
  level(epochs: number): number;
  /** Value that chance alone passes with probability p, for one test. */
  critical(epochs: number, p: number): number;
  /** Sd of the difference of two values by chance. */
  differenceSd(epochsA: number, epochsB: number): number;
}

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

export const ispcChance: ChanceLevels = {
  level: chanceIspc,
  critical: criticalIspc,
  differenceSd,
};

/**
 * (N R^2 - 1) / (N - 1), with N R^2 close to exponential of mean 1: mean 0, sd 1 / (N - 1).
 */
export const consistencyChance: ChanceLevels = {
  level: () => 0,
  critical: (epochs, p) =>
    epochs < 2 ? 1 : Math.min(1, Math.max(0, (-Math.log(p) - 1) / (epochs - 1))),
  differenceSd: (a, b) => Math.hypot(1 / Math.max(1, a - 1), 1 / Math.max(1, b - 1)),
};

/**
 * |S| of a sum S of N terms with mean 0 and variance `variance`, over N: close to the absolute value
 * of a normal (central limit).
 */
export function absoluteMeanChance(variance: number): ChanceLevels {
  const folded = 1 - 2 / Math.PI;
  return {
    level: (epochs) => Math.min(1, Math.sqrt((2 * variance) / (Math.PI * epochs))),
    // A bound, exp(-x^2 / 2) of the two-sided tail, on the side of caution.
    critical: (epochs, p) => Math.min(1, Math.sqrt((-2 * variance * Math.log(p)) / epochs)),
    differenceSd: (a, b) => Math.sqrt(folded * variance * (1 / a + 1 / b)),
  };
}
