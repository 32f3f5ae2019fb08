import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  clopperPearson,
  passes,
  permutationP,
  tailExceedances,
  tailP,
  tailPWithInterval,
} from '../../../workers/engine';
import { mostExceedances } from '../../../workers/engine/correct/p-value';

describe('permutationP', () => {
  // Phipson and Smyth 2010, p = (b + 1) / (m + 1); 5 of 99 is .06 in R statmod 1.5.0. REP
  test.each([
    [5, 99, 0.06],
    [0, 999, 0.001],
    [4, 99, 0.05],
    [0, 99, 0.01],
    [49, 9999, 0.005],
  ])('is (b + 1) / (m + 1): %i of %i gives %d', (b, m, p) => {
    expect(permutationP(b, m)).toBeCloseTo(p, 15);
  });

  test('is doubled and capped for two-sided tests, on the nearer side', () => {
    expect(tailP(4, 99, 'two-sided')).toBeCloseTo(0.1, 15);
    expect(tailP(60, 99, 'two-sided')).toBe(1);
    expect(tailP(4, 99, 'a-greater')).toBeCloseTo(0.05, 15);
    expect(tailExceedances(3, 97, 'two-sided')).toBe(3);
    expect(tailExceedances(97, 3, 'two-sided')).toBe(3);
    expect(tailExceedances(3, 97, 'a-greater')).toBe(3);
    expect(tailExceedances(3, 97, 'b-greater')).toBe(97);
  });

  test('passes alpha exactly when the exceedances allowed are not passed', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 19, max: 100_000 }),
        fc.integer({ min: 1, max: 500 }),
        fc.integer({ min: -2, max: 2 }),
        (permutations, perMille, off) => {
          const alpha = perMille / 1000;
          const most = mostExceedances(alpha, permutations);
          const b = Math.max(0, most + off);
          const p = permutationP(b, permutations);
          expect(passes(p, alpha)).toBe(b <= most);
          // A p that went through f32 must not change sides.
          expect(passes(Math.fround(p), alpha)).toBe(b <= most);
        },
      ),
    );
  });
});

describe('clopperPearson', () => {
  test.each([
    // R 4.2.2 binom.test: 682/925 in its help page (Conover 1971). REP
    [682, 925, 0.95, 0.7076682640790388, 0.7654065582415253],
    // R binom.test(20, 100); SciPy 1.10.1 binomtest. REP
    [20, 100, 0.95, 0.12665555210195586, 0.2918426890886281],
    // Rule of three's exact form. REP
    [0, 10, 0.95, 0, 0.3084971078187608],
    // SciPy 1.10.1 and statsmodels 0.13.5. COMP
    [49, 999, 0.95, 0.03650378349045798, 0.06432986442771635],
    // NIST/SEMATECH e-Handbook 7.2.4.1. MEM
    [4, 20, 0.9, 0.0713538843086182, 0.4010281173319745],
    // statsmodels tests. COMP
    [51, 235, 0.95, 0.16606332980830793, 0.27526836402892535],
  ])('of %i in %i at %d is the published interval', (hits, trials, level, low, high) => {
    const found = clopperPearson(hits, trials, level);
    expect(found[0]).toBeCloseTo(low, 10);
    expect(found[1]).toBeCloseTo(high, 10);
  });

  test('ends at 1 when every trial is a hit, and holds the proportion in between', () => {
    expect(clopperPearson(10, 10)[1]).toBe(1);
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 100_000 }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (n, part) => {
          const hits = Math.round(part * n);
          const [low, high] = clopperPearson(hits, n);
          expect(low).toBeLessThanOrEqual(hits / n);
          expect(high).toBeGreaterThanOrEqual(hits / n);
          // The mirror image: misses in place of hits.
          const mirror = clopperPearson(n - hits, n);
          expect(Math.abs(mirror[0] - (1 - high))).toBeLessThan(1e-9);
        },
      ),
      { numRuns: 50 },
    );
  });

  test('refuses counts that are no counts, naming them', () => {
    expect(() => clopperPearson(11, 10)).toThrow('hits is 11 of 10 trials');
    expect(() => clopperPearson(1.5, 10)).toThrow(RangeError);
    expect(() => clopperPearson(-1, 10)).toThrow(RangeError);
  });

  test('is doubled beside a two-sided p, and holds it', () => {
    const { p, interval } = tailPWithInterval(4, 999, 'two-sided');
    const [low, high] = clopperPearson(4, 999);
    expect(p).toBeCloseTo(0.01, 15);
    expect(interval).toEqual([2 * low, 2 * high]);
    expect(tailPWithInterval(700, 999, 'two-sided').interval[1]).toBe(1);
  });
});
