import { describe, expect, test } from 'vitest';
import {
  computePairs,
  drawPermutations,
  drawsByteLength,
  histogramBins,
  nullIds,
  ties,
  type Plan,
} from '../../../workers/engine';
import { chooseKernels, newKernels } from '../../../workers/kernels';
import { PairNull, type NullSettings } from '../../../workers/engine/null/pair-null';
import { nullModelOf } from '../../../workers/engine/null/registry';
import { runInput } from '../../../workers/engine/run-input';
import { naiveFeature, naiveLargestMass, type NaiveFeature } from './naive';
import { drawAll, mapsOf, noise, tinyRun, type TinyRun } from './tiny-run';

const F = 2;
const T = 4;
const points = F * T;

function everyFeature(run: TinyRun, draws: SharedArrayBuffer): NaiveFeature[] {
  return run.axes.pairs.flatMap((_, pair) =>
    Array.from({ length: points }, (_p, x) =>
      naiveFeature(run, draws, pair, Math.floor(x / T), x % T),
    ),
  );
}

const mapSettings: NullSettings = {
  frequencyCount: F,
  timeCount: T,
  tailSign: 0,
  clusterFormingZ: 1,
  binCount: 24,
  binsPerUnit: 2,
  binOffset: 12,
};

const signsOf = { 'two-sided': [1, -1], 'a-greater': [1], 'b-greater': [-1] } as const;

// f32 storage: 6e-8 of a measure of at most 1; an sd near .1 turns that into 1e-6 of a z, and z
// differences into a few times that.
const measureTolerance = 2e-7;
const zTolerance = 2e-5;

describe.each(nullIds)('computePairs under %s', (nullId) => {
  const tails: Plan['test']['tail'][] = ['two-sided', 'a-greater', 'b-greater'];

  test.each(tails)('gives every number as the definitions read, %s', (tail) => {
    const run = tinyRun(noise(`definitions ${tail}`), {
      nullId,
      windowSamples: 11,
      test: { tail, clusterFormingZ: 1 },
    });
    const draws = drawAll(run);
    const maps = mapsOf(run, draws);
    const expected = everyFeature(run, draws);
    for (const [x, feature] of expected.entries()) {
      expect(Math.abs(maps.observedA[x] - feature.observedA)).toBeLessThan(measureTolerance);
      expect(Math.abs(maps.observedB[x] - feature.observedB)).toBeLessThan(measureTolerance);
      expect(Math.abs(maps.nullMean[x] - feature.mean)).toBeLessThan(zTolerance);
      expect(Math.abs(maps.nullSd[x] - feature.sd)).toBeLessThan(zTolerance);
      expect(Math.abs(maps.z[x] - feature.z)).toBeLessThan(zTolerance);
      const tolerance = nullId === 'labels' ? ties.measure : ties.z;
      const away = feature.surrogates.map((value) => value - feature.statistic);
      expect(maps.upper[x]).toBe(away.filter((value) => value >= -tolerance).length);
      expect(maps.lower[x]).toBe(away.filter((value) => value <= tolerance).length);
      expect([...histogramOf(maps.histogram, x)]).toEqual(binned(feature.nullZ));
    }
    for (let p = 0; p < run.plan.test.permutations; p++) {
      const signed = expected.flatMap(({ nullZ }) => signsOf[tail].map((sign) => sign * nullZ[p]));
      expect(Math.abs(maps.maxStatistic[p] - Math.max(...signed))).toBeLessThan(zTolerance);
      const masses = run.axes.pairs.map((_, pair) =>
        naiveLargestMass(mapAt(expected, pair, p), 1, [...signsOf[tail]]),
      );
      // Masses jump when a point lies on the threshold; none of these seeded ones does.
      expect(Math.abs(maps.maxClusterMass[p] - Math.max(...masses))).toBeLessThan(20 * zTolerance);
    }
  });

  test('gives a pair the same numbers in whatever block it is computed', () => {
    const run = tinyRun(noise('blocks'), { nullId });
    const draws = drawAll(run);
    const whole = mapsOf(run, draws);
    const phases = { buffer: run.phases, ...run.counts };
    const last = computePairs(run.plan, run.axes, { from: 2, to: 3 }, phases, { buffer: draws });
    expect(last.z).toEqual(whole.z.subarray(2 * points));
    expect(last.upper).toEqual(whole.upper.subarray(2 * points));
    expect(last.histogram).toEqual(whole.histogram.subarray(2 * points * histogramBins.count));
  });

  test('gives the same numbers in tiles as at once', () => {
    const run = tinyRun(noise('tiles'), { nullId });
    const phases = { buffer: run.phases, ...run.counts };
    const input = runInput(run.plan, run.axes, phases, { buffer: drawAll(run) });
    const seen = [1e6, 10 * points, 1].map((tileValues) => {
      const settings = { ...mapSettings, tileValues };
      const nulls = new PairNull(nullModelOf(nullId), input, newKernels(), settings);
      nulls.add(0, 1);
      nulls.add(0, 2);
      const { groups, best, masses, histogram, observed } = nulls;
      return { groups, best, masses, histogram, observed };
    });
    expect(Math.max(...seen[0].masses)).toBeGreaterThan(1);
    expect(seen[1]).toEqual(seen[0]);
    expect(seen[2]).toEqual(seen[0]);
  });

  test('gives the same digest’s counts with compiled and with plain kernels', () => {
    // 21 features: two full groups of eight and one that is not.
    const run = tinyRun(noise('kinds'), { nullId, frequencyCount: 3, timeCount: 7 });
    const [compiled, plain] = (['compiled', 'plain'] as const).map((kind) => {
      chooseKernels(kind);
      return mapsOf(run);
    });
    chooseKernels('auto');
    expect({ ...compiled, maxClusterMass: null }).toEqual({ ...plain, maxClusterMass: null });
    for (const [p, mass] of compiled.maxClusterMass.entries()) {
      expect(Math.abs(mass - plain.maxClusterMass[p])).toBeLessThanOrEqual(1e-6 * mass);
    }
  });

  test('tells of each pair done', () => {
    const run = tinyRun(noise('progress'), { nullId });
    const done: number[] = [];
    const phases = { buffer: run.phases, ...run.counts };
    const draws = { buffer: drawAll(run) };
    computePairs(run.plan, run.axes, { from: 1, to: 3 }, phases, draws, (n) => done.push(n));
    expect(done).toEqual([1, 2]);
  });
});

describe('computePairs', () => {
  test('gives z = 0 and p = 1, never NaN, where all phases are equal', () => {
    for (const nullId of nullIds) {
      const maps = mapsOf(tinyRun(() => 1.25, { nullId }));
      expect([...maps.observedA].every((value) => Math.abs(value - 1) < 1e-6)).toBe(true);
      expect(maps.z.every((value) => value === 0)).toBe(true);
      expect(maps.nullSd.every((value) => value === 0)).toBe(true);
      expect(maps.upper.every((count) => count === 99)).toBe(true);
      expect(maps.lower.every((count) => count === 99)).toBe(true);
    }
  });

  test('keeps every number finite for opposite phases and for 2 epochs a condition', () => {
    for (const nullId of nullIds) {
      const opposite = tinyRun((site, epoch) => (site === 0 && epoch % 2 ? Math.PI : 0), {
        nullId,
        epochsA: 8,
        epochsB: 6,
      });
      const two = tinyRun(noise('two'), { nullId, epochsA: 2, epochsB: 2 });
      for (const maps of [mapsOf(opposite), mapsOf(two)]) {
        for (const map of [maps.observedA, maps.observedB, maps.z, maps.nullSd, maps.lagA]) {
          expect(map.every((value) => Number.isFinite(value))).toBe(true);
        }
        expect(maps.maxStatistic.every((value) => Number.isFinite(value))).toBe(true);
      }
    }
  });

  test('counts tied statistics both ways', () => {
    const run = tinyRun((site, epoch) => (site === 0 && epoch > 0 ? 2 : 0), {
      siteCount: 2,
      epochsA: 2,
      epochsB: 2,
      frequencyCount: 1,
      timeCount: 1,
    });
    const draws = drawAll(run);
    // Whichever condition holds the first epoch has R = cos 1, the other R = 1: D is one of two
    // values, and ties with the observed one exactly when the first epoch stays in A.
    const stays = new Uint8Array(draws).filter((mask) => mask & 1).length;
    const maps = mapsOf(run, draws);
    expect(maps.upper[0]).toBe(99);
    expect(maps.lower[0]).toBe(stays);
    expect(stays).toBeGreaterThan(30);
  });

  test('gives the same numbers where a pair has more features than are tabulated at once', () => {
    const run = tinyRun(noise('many features'), {
      siteCount: 2,
      frequencyCount: 41,
      timeCount: 1601,
      test: { permutations: 19 },
    });
    const draws = drawAll(run);
    const maps = mapsOf(run, draws);
    // 16 epochs of 2 terms: 65,536 features are held at once.
    for (const x of [0, 65_535, 65_536, 65_640]) {
      const feature = naiveFeature(run, draws, 0, Math.floor(x / 1601), x % 1601);
      expect(Math.abs(maps.z[x] - feature.z)).toBeLessThan(zTolerance);
      expect(Math.abs(maps.nullSd[x] - feature.sd)).toBeLessThan(measureTolerance);
    }
  });

  test('states the preferred lag of each condition', () => {
    const run = tinyRun((site, epoch) => (site === 0 ? (epoch < 9 ? 0.5 : -2) : 0));
    const maps = mapsOf(run);
    expect(maps.lagA[0]).toBeCloseTo(0.5, 6);
    expect(maps.lagB[0]).toBeCloseTo(-2, 6);
  });

  test('refuses one epoch, naming the condition and the remedy', () => {
    const run = tinyRun(noise('one'), { epochsB: 1 });
    expect(() => mapsOf(run)).toThrow('condition B has 1 epochs, at least 2 are needed: widen');
  });

  test('refuses ranges and buffers that do not fit the plan', () => {
    const run = tinyRun(noise('fit'));
    const phases = { buffer: run.phases, ...run.counts };
    const draws = { buffer: drawAll(run) };
    const compute = (range: { from: number; to: number }, p = phases, d = draws) => {
      return () => computePairs(run.plan, run.axes, range, p, d);
    };
    expect(compute({ from: 0, to: 4 })).toThrow("range 0 to 4 leaves the plan's 3 pairs");
    expect(compute({ from: 1, to: 1 })).toThrow(RangeError);
    const whole = { from: 0, to: 3 };
    const short = new SharedArrayBuffer(8);
    expect(compute(whole, { ...phases, buffer: short })).toThrow('phases: a buffer of 8 bytes');
    expect(compute(whole, phases, { buffer: short })).toThrow('draws: a buffer of 8 bytes');
  });

  test('fills the outer bin and stops at 65535 rather than starting over', () => {
    const run = tinyRun(() => 0, {
      siteCount: 2,
      epochsA: 2,
      epochsB: 2,
      frequencyCount: 1,
      timeCount: 1,
      test: { permutations: 70_000 },
    });
    const draws = new SharedArrayBuffer(drawsByteLength(run.plan, run.axes, run.counts));
    drawPermutations(run.plan, run.axes, run.counts, { from: 0, to: 10 }, draws);
    // 10 permutations label two epochs A, all others none: D = 0 ten times, D = -1 else.
    const { histogram } = mapsOf(run, draws);
    expect(histogram[histogramBins.count - 1]).toBe(10);
    expect(Math.max(...histogram)).toBe(65_535);
  });
});

function mapAt(features: NaiveFeature[], pair: number, p: number): number[][] {
  return Array.from({ length: F }, (_, f) =>
    Array.from({ length: T }, (_t, t) => features[pair * points + f * T + t].nullZ[p]),
  );
}

function histogramOf(histogram: Uint16Array, feature: number): Uint16Array {
  return histogram.subarray(feature * histogramBins.count, (feature + 1) * histogramBins.count);
}

function binned(values: number[]): number[] {
  const bins = new Array<number>(histogramBins.count).fill(0);
  for (const value of values) {
    const bin = Math.floor((value - histogramBins.from) / histogramBins.width);
    bins[Math.min(bins.length - 1, Math.max(0, bin))]++;
  }
  return bins;
}
