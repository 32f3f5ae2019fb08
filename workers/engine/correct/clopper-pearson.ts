import { gammaln } from 'simple-statistics';

/**
 * The exact interval of a proportion, from the beta distribution.
 * @param hits successes, 0 .. trials
 * @param confidence two-sided coverage, 0.95 unless stated
 * @returns lower and upper bound, in 0 .. 1
 * @throws RangeError when hits is no whole number in 0 .. trials
 * Source: Clopper and Pearson 1934.
 * @example clopperPearson(20, 100) // [0.12665555, 0.29184269]
 */
export function clopperPearson(hits: number, trials: number, confidence = 0.95): [number, number] {
  if (!Number.isInteger(hits) || !Number.isInteger(trials) || hits < 0 || hits > trials) {
    throw new RangeError(`clopperPearson: hits is ${hits} of ${trials} trials`);
  }
  const side = (1 - confidence) / 2;
  const low = hits === 0 ? 0 : betaQuantile(side, hits, trials - hits + 1);
  const high = hits === trials ? 1 : betaQuantile(1 - side, hits + 1, trials - hits);
  return [low, high];
}

/** Bisection: the distribution function is monotone, and 60 halvings reach the last bit. */
function betaQuantile(p: number, a: number, b: number): number {
  let low = 0;
  let high = 1;
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (regularisedBeta(middle, a, b) < p) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** I_x(a, b) by its continued fraction (Lentz's method), on the side where it converges fast. */
function regularisedBeta(x: number, a: number, b: number): number {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  if (x > (a + 1) / (a + b + 2)) return 1 - regularisedBeta(1 - x, b, a);
  const front = gammaln(a + b) - gammaln(a) - gammaln(b) + a * Math.log(x) + b * Math.log1p(-x);
  return (Math.exp(front) / a) * betaFraction(x, a, b);
}

function betaFraction(x: number, a: number, b: number): number {
  const tiny = 1e-300;
  let c = 1;
  let d = 1 / notZero(1 - ((a + b) * x) / (a + 1), tiny);
  let fraction = d;
  // Some tens of steps for the largest counts here; the bound only guards against NaN.
  for (let m = 1; m <= 10_000; m++) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 / notZero(1 + even * d, tiny);
    c = notZero(1 + even / c, tiny);
    fraction *= c * d;
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / notZero(1 + odd * d, tiny);
    c = notZero(1 + odd / c, tiny);
    fraction *= c * d;
    if (Math.abs(c * d - 1) < 1e-15) break;
  }
  return fraction;
}

function notZero(value: number, tiny: number): number {
  return Math.abs(value) < tiny ? tiny : value;
}
