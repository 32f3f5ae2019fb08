import { describe, expect, test } from 'vitest';
import { permutationP } from '../../../workers/engine';
import type { Measure } from '../../../workers/engine/measure/measure';
import { ispc } from '../../../workers/engine/measure/ispc';
import { labels } from '../../../workers/engine/null/labels';
import type { NullModel, RunInput } from '../../../workers/engine/null/model';
import { trialOrder } from '../../../workers/engine/null/trial-order';
import { ties } from '../../../workers/engine';
import { allLabels, allOrders, choices } from './enumerated';
import { drawAll, mapsOf, tinyRun } from './tiny-run';

/** The mean of plain numbers (the real part of site j), so that published samples can be tested. */
const mean: Measure = {
  ...ispc,
  termCount: 1,
  sumTerms(phasors, jStarts, _, sums, { epochCount }) {
    sums[0] = 0;
    for (let n = 0; n < epochCount; n++) sums[0] += phasors[jStarts[n]];
  },
  values(sums, epochCount, values, count) {
    for (let i = 0; i < count; i++) values[i] = sums[i] / epochCount;
  },
};

/** Two sites, one feature; `phasors` is [site][epoch][part]. */
function input(
  measure: Measure,
  phasors: Float32Array,
  epochs: { a: number; b: number },
  draws: ArrayBuffer,
  permutations: number,
): RunInput {
  return {
    measure,
    phasors,
    layout: {
      siteCount: 2,
      epochCount: epochs.a + epochs.b,
      frequencyCount: 1,
      samplesPerFrequency: 1,
      keptSamples: Int32Array.of(0),
      samplesPerEpoch: 1,
      byteLength: phasors.byteLength,
    },
    shape: { permutations, siteCount: 2, epochsA: epochs.a, epochsB: epochs.b, windowSamples: 1 },
    draws,
    featureCount: 1,
  };
}

function surrogatesOf(model: NullModel, run: RunInput): { a: Float32Array; b: Float32Array } {
  const { permutations } = run.shape;
  const a = new Float32Array(permutations);
  const b = new Float32Array(permutations);
  model.sampler(run).surrogates(0, 1, { from: 0, to: permutations }, a, b);
  return { a, b };
}

function exceedances(values: Float32Array, observed: number, tolerance: number = ties.measure) {
  return {
    upper: values.filter((value) => value - observed >= -tolerance).length,
    lower: values.filter((value) => value - observed <= tolerance).length,
  };
}

// Exact permutation tests by full enumeration; each relabelling is fed to the label null once.
// Counts agree in three tools (NumPy, SciPy 1.10.1 permutation_test, R exactRankTests).
const samples = [
  {
    name: 'mouse survival, 7 against 9 (Efron and Tibshirani 1993, Table 2.1). COMP',
    x: [94, 197, 16, 38, 99, 141, 23],
    y: [52, 104, 146, 10, 51, 30, 40, 27, 46],
    total: 11440,
    upper: 1613,
    lower: 9853,
  },
  {
    name: 'blood pressure, 4 against 11 with ties (Mehta and Patel 2001, Table 9.6). REP',
    x: [94, 108, 110, 90],
    y: [80, 94, 85, 90, 90, 90, 108, 94, 78, 105, 88],
    total: 1365,
    upper: 77,
    lower: 1312,
  },
  {
    name: 'Pitman 1937, 4 against 5. Data MEM',
    x: [0, 11, 12, 20],
    y: [16, 19, 22, 24, 29],
    total: 126,
    upper: 124,
    lower: 3,
  },
];

describe('the label null over all relabellings', () => {
  for (const sample of samples) {
    test(`counts as published: ${sample.name}`, () => {
      const { x, y } = sample;
      const phasors = new Float32Array(2 * (x.length + y.length) * 2);
      [...x, ...y].forEach((value, n) => (phasors[2 * n] = value));
      const { draws, count } = allLabels(x.length, y.length);
      const epochs = { a: x.length, b: y.length };
      const { a } = surrogatesOf(labels, input(mean, phasors, epochs, draws, count));
      const average = (list: number[]) => list.reduce((s, v) => s + v, 0) / list.length;
      const found = exceedances(a, Math.fround(average(x) - average(y)));
      expect(count).toBe(sample.total);
      expect(found).toEqual({ upper: sample.upper, lower: sample.lower });
    });
  }

  // reference/07_moments.json: z_n = exp(i (.4 n + .35 n^2)); computed by enumeration in NumPy. COMP
  const moments = [
    { n: 6, nA: 2, variance: 1.5366274178, meanSquare: 0.4237647183, twoSided: 4, total: 15 },
    { n: 6, nA: 3, variance: 1.728705845, meanSquare: 0.2316862911, twoSided: 20, total: 20 },
    { n: 7, nA: 3, variance: 1.8485141728, meanSquare: null, twoSided: 20, total: 35 },
  ];

  for (const { n, nA, variance, meanSquare, twoSided, total } of moments) {
    test(`has the exact moments and counts of ${nA} of ${n} unit vectors`, () => {
      const z = Array.from({ length: n }, (_, i) => 0.4 * (i + 1) + 0.35 * (i + 1) ** 2);
      const phasors = pairOf(z, new Array<number>(n).fill(0));
      const { draws, count } = allLabels(nA, n - nA);
      const run = input(ispc, phasors, { a: nA, b: n - nA }, draws, count);
      const { a } = surrogatesOf(labels, run);
      const groups = choices(n, nA).map((chosen) => resultant(chosen.map((i) => z[i])));
      const rest = choices(n, nA).map((chosen) =>
        resultant(z.filter((_, i) => !chosen.includes(i))),
      );
      const D = groups.map((group, p) => group.length / nA - rest[p].length / (n - nA));
      expect(count).toBe(total);
      D.forEach((difference, p) => expect(a[p]).toBeCloseTo(difference, 6));
      const observed = D[choices(n, nA).findIndex((chosen) => chosen.every((v, i) => v === i))];
      expect(a.filter((value) => Math.abs(value) >= Math.abs(observed) - ties.measure).length).toBe(
        twoSided,
      );
      expect(varianceOf(groups)).toBeCloseTo(variance, 9);
      if (meanSquare !== null) {
        const squares = groups.map((group) => (group.length / nA) ** 2);
        expect(squares.reduce((s, v) => s + v, 0) / total).toBeCloseTo(meanSquare, 9);
      }
    });
  }

  test('estimates the exact p of unequal groups by its own draws', () => {
    const z = Array.from({ length: 7 }, (_, i) => 0.4 * (i + 1) + 0.35 * (i + 1) ** 2);
    const { draws, count } = allLabels(3, 4);
    const run = input(ispc, pairOf(z, new Array<number>(7).fill(0)), { a: 3, b: 4 }, draws, count);
    const all = surrogatesOf(labels, run).a;
    const tiny = tinyRun((site, epoch) => (site === 0 ? z[epoch] : 0), {
      siteCount: 2,
      epochsA: 3,
      epochsB: 4,
      frequencyCount: 1,
      timeCount: 1,
      test: { permutations: 20_000 },
    });
    const maps = mapsOf(tiny, drawAll(tiny));
    const observed = Math.fround(maps.observedA[0] - maps.observedB[0]);
    const exact = exceedances(all, observed).upper / count;
    // 5 standard errors: false alarm below 1e-6.
    const standardError = Math.sqrt((exact * (1 - exact)) / 20_000);
    expect(Math.abs(permutationP(maps.upper[0], 20_000) - exact)).toBeLessThan(5 * standardError);
  });
});

describe('the trial-order null over all orders', () => {
  // reference/07_moments.json: u_n = exp(i (.3 + .7 n^2)), v_n = exp(i (1.1 n + .2 n^3)), n = 1..N;
  // computed by enumeration in NumPy and in closed form (Hoeffding 1951). COMP
  const cases = [
    { n: 5, meanSquare: 0.2194810673, observed: 0.66837313, count: 15, total: 120 },
    { n: 6, meanSquare: 0.1673946224, observed: 0.6282824937, count: 59, total: 720 },
  ];

  for (const { n, meanSquare, observed, count, total } of cases) {
    test(`has the exact mean square and p of ${n} epochs`, () => {
      const index = Array.from({ length: n }, (_, i) => i + 1);
      const u = [...index.map((i) => 0.3 + 0.7 * i * i), 0, 0];
      const v = [...index.map((i) => 1.1 * i + 0.2 * i ** 3), 0, 0];
      const all = allOrders(n, 2);
      const run = input(ispc, pairOf(u, v), { a: n, b: 2 }, all.draws, all.count);
      const { a, b } = surrogatesOf(trialOrder, run);
      const found = resultant(index.map((_, i) => u[i] - v[i])).length / n;
      expect(all.count).toBe(total);
      expect(found).toBeCloseTo(observed, 8);
      expect(exceedances(a, found).upper).toBe(count);
      // Phasors are stored in f32: 6e-8 each.
      expect(a.reduce((s, r) => s + r * r, 0) / total).toBeCloseTo(meanSquare, 6);
      expect([...b]).toEqual(new Array<number>(total).fill(1));
    });
  }

  test('reaches the same mean square by its own draws, with both sites shuffled', () => {
    const index = [1, 2, 3, 4, 5, 6];
    const u = index.map((i) => 0.3 + 0.7 * i * i);
    const v = index.map((i) => 1.1 * i + 0.2 * i ** 3);
    const permutations = 20_000;
    const shape = { permutations, siteCount: 2, epochsA: 6, epochsB: 2, windowSamples: 1 };
    const draws = new ArrayBuffer(trialOrder.drawsByteLength(shape));
    trialOrder.draw('moments', { from: 0, to: permutations }, draws, shape);
    const run = input(
      ispc,
      pairOf([...u, 0, 0], [...v, 0, 0]),
      { a: 6, b: 2 },
      draws,
      permutations,
    );
    const squares = surrogatesOf(trialOrder, run).a.map((r) => r * r);
    const average = squares.reduce((s, r) => s + r, 0) / permutations;
    const spread = squares.reduce((s, r) => s + (r - average) ** 2, 0) / permutations;
    // 5 standard errors: false alarm below 1e-6.
    expect(Math.abs(average - 0.1673946224)).toBeLessThan(5 * Math.sqrt(spread / permutations));
  });
});

function pairOf(u: number[], v: number[]): Float32Array {
  return Float32Array.from([...u, ...v].flatMap((rad) => [Math.cos(rad), Math.sin(rad)]));
}

function resultant(phasesRad: number[]): { re: number; im: number; length: number } {
  const re = phasesRad.reduce((sum, rad) => sum + Math.cos(rad), 0);
  const im = phasesRad.reduce((sum, rad) => sum + Math.sin(rad), 0);
  return { re, im, length: Math.hypot(re, im) };
}

/** E|S - E S|^2 over equally likely sums. */
function varianceOf(sums: { re: number; im: number }[]): number {
  const re = sums.reduce((total, sum) => total + sum.re, 0) / sums.length;
  const im = sums.reduce((total, sum) => total + sum.im, 0) / sums.length;
  return sums.reduce((total, s) => total + (s.re - re) ** 2 + (s.im - im) ** 2, 0) / sums.length;
}
