import type { Axes, NullId } from '../../../workers/engine';
import type { TinyRun } from './tiny-run';

/**
 * The definitions of numerics.md read out loud, feature by feature and permutation by permutation,
 * without any of the engine's shortcuts: what computePairs is held against.
 */
export interface NaiveFeature {
  observedA: number;
  observedB: number;
  statistic: number;
  surrogates: number[];
  mean: number;
  sd: number;
  z: number;
  nullZ: number[];
}

type Complex = [number, number];

/** Unit phasor of a site at an epoch, a frequency and a stored sample. */
function reader(run: TinyRun, samples: number) {
  const phasors = new Float32Array(run.phases);
  const perEpoch = run.axes.frequenciesHz.length * samples;
  const epochs = run.counts.epochsA + run.counts.epochsB;
  return (site: number, epoch: number, f: number, s: number): Complex => {
    const at = (site * epochs + epoch) * 2 * perEpoch + f * samples + s;
    return [phasors[at], phasors[at + perEpoch]];
  };
}

const isLabels = (id: NullId) => id === 'labels' || id === 'labels-within-blocks';

export function isWholeWindow(id: NullId): boolean {
  return id === 'time-shift';
}

function storedSamples(run: TinyRun): number {
  const window = Math.round(run.plan.epoch.toS * 100) + 1;
  return isWholeWindow(run.plan.null) ? window : run.axes.timesS.length;
}

/** R over pairs of (epoch, sample) of both sites. */
function resultant(terms: [Complex, Complex][]): number {
  let re = 0;
  let im = 0;
  for (const [[a, b], [c, d]] of terms) {
    re += a * c + b * d;
    im += b * c - a * d;
  }
  return Math.hypot(re, im) / terms.length;
}

const sumOf = (list: number[]) => list.reduce((sum, value) => sum + value, 0);

function meanAndSd(list: number[]): { mean: number; sd: number } {
  const mean = sumOf(list) / list.length;
  const squares = sumOf(list.map((value) => (value - mean) ** 2));
  return { mean, sd: Math.sqrt(squares / (list.length - 1)) };
}

function range(from: number, to: number): number[] {
  return Array.from({ length: to - from }, (_, i) => from + i);
}

/** Measure of A and of B under permutation p (null: as recorded). */
function conditions(
  run: TinyRun,
  draws: ArrayBuffer | SharedArrayBuffer,
  [j, k]: Axes['pairs'][number],
  f: number,
  t: number,
) {
  const { epochsA, epochsB } = run.counts;
  const epochs = epochsA + epochsB;
  const samples = storedSamples(run);
  const at = reader(run, samples);
  const kept = isWholeWindow(run.plan.null) ? 2 * t : t;
  const sites = run.axes.sites.length;
  const words = isLabels(run.plan.null) ? new Uint16Array(0) : new Uint16Array(draws);
  const masks = new Uint8Array(draws);
  return (p: number | null): { a: number; b: number } => {
    const draw = (site: number, n: number) => words[((p ?? 0) * sites + site) * epochs + n];
    const term = (n: number): [Complex, Complex] => {
      if (p === null || isLabels(run.plan.null)) return [at(j, n, f, kept), at(k, n, f, kept)];
      if (run.plan.null === 'trial-order') {
        return [at(j, draw(j, n), f, kept), at(k, draw(k, n), f, kept)];
      }
      const shifted = (site: number) => (kept + draw(site, n)) % samples;
      return [at(j, n, f, shifted(j)), at(k, n, f, shifted(k))];
    };
    const blocks = Math.ceil(epochs / 7);
    const isA = (n: number) =>
      p === null || !isLabels(run.plan.null)
        ? n < epochsA
        : ((masks[p * blocks + Math.floor(n / 7)] >> (n % 7)) & 1) === 1;
    const all = range(0, epochs);
    return {
      a: resultant(all.filter(isA).map(term)),
      b: resultant(all.filter((n) => !isA(n)).map(term)),
    };
  };
}

export function naiveFeature(
  run: TinyRun,
  draws: ArrayBuffer | SharedArrayBuffer,
  pair: number,
  f: number,
  t: number,
): NaiveFeature {
  const measure = conditions(run, draws, run.axes.pairs[pair], f, t);
  const observed = measure(null);
  const made = range(0, run.plan.test.permutations).map((p) => measure(p));
  const isDifference = isLabels(run.plan.null);
  const own = {
    a: meanAndSd(made.map((m) => m.a)),
    b: meanAndSd(made.map((m) => m.b)),
  };
  const statisticOf = ({ a, b }: { a: number; b: number }) =>
    isDifference ? a - b : (a - own.a.mean) / own.a.sd - (b - own.b.mean) / own.b.sd;
  const statistic = statisticOf(observed);
  const surrogates = made.map(statisticOf);
  const { mean, sd } = meanAndSd(surrogates);
  return {
    observedA: observed.a,
    observedB: observed.b,
    statistic,
    surrogates,
    mean,
    sd,
    z: (statistic - mean) / sd,
    nullZ: surrogates.map((value) => (value - mean) / sd),
  };
}

/** Largest |mass| of a map's clusters by flood fill, 4-neighbourhood. */
export function naiveLargestMass(z: number[][], threshold: number, signs: number[]): number {
  const seen = z.map((row) => row.map(() => false));
  let largest = 0;
  const flood = (f: number, t: number, sign: number): number => {
    if (z[f]?.[t] === undefined || seen[f][t] || z[f][t] * sign <= threshold) return 0;
    seen[f][t] = true;
    const around = [flood(f + 1, t, sign), flood(f - 1, t, sign)];
    return Math.abs(z[f][t]) + sumOf(around) + flood(f, t + 1, sign) + flood(f, t - 1, sign);
  };
  for (const sign of signs) {
    z.forEach((row, f) =>
      row.forEach((_, t) => {
        largest = Math.max(largest, flood(f, t, sign));
      }),
    );
  }
  return largest;
}
