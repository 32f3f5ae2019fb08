import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { permutationGenerator, shuffle } from '../../../workers/engine/null/random';

// Chi-square bounds are the 1 - 1e-6 quantiles (SciPy 1.10.1, scipy.stats.chi2.isf(1e-6, df)),
// so each of these seeded checks would fail by chance once in a million seeds.
const chiSquareBound = { 5: 35.888, 6: 38.258 } as const;

function chiSquare(counts: number[]): number {
  const expected = counts.reduce((sum, count) => sum + count, 0) / counts.length;
  return counts.reduce((sum, count) => sum + (count - expected) ** 2 / expected, 0);
}

describe('permutationGenerator', () => {
  test('gives the same numbers for the same seed, null and permutation, and others otherwise', () => {
    const list = (seed: string, id: string, p: number) => {
      const random = permutationGenerator(seed, id, p);
      return Array.from({ length: 8 }, () => random.below(2 ** 32));
    };
    expect(list('tide', 'labels', 3)).toEqual(list('tide', 'labels', 3));
    expect(list('tide', 'labels', 3)).not.toEqual(list('tide', 'labels', 4));
    expect(list('tide', 'labels', 3)).not.toEqual(list('tide', 'time-shift', 3));
    expect(list('tide', 'labels', 3)).not.toEqual(list('ebb', 'labels', 3));
  });

  test('stays below its limit for any limit', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 2 ** 32 }), fc.string(), (limit, seed) => {
        const value = permutationGenerator(seed, 'labels', 0).below(limit);
        return Number.isInteger(value) && value >= 0 && value < limit;
      }),
    );
  });

  test('is uniform below 7 over many permutations, one number each', () => {
    const counts = new Array<number>(7).fill(0);
    for (let p = 0; p < 14_000; p++) counts[permutationGenerator('u', 'labels', p).below(7)]++;
    expect(chiSquare(counts)).toBeLessThan(chiSquareBound[6]);
  });

  test('has no modulo bias at a limit of two thirds of its range', () => {
    // Taken modulo, the lower half of the range would come up twice as often.
    const limit = Math.round((2 / 3) * 2 ** 32);
    const random = permutationGenerator('bias', 'labels', 0);
    let low = 0;
    const draws = 20_000;
    for (let i = 0; i < draws; i++) if (random.below(limit) < limit / 2) low++;
    // 5 standard errors of a fair coin: false alarm below 1e-6.
    expect(Math.abs(low - draws / 2)).toBeLessThan(5 * Math.sqrt(draws / 4));
  });
});

describe('shuffle', () => {
  test('makes each of the 6 orders of 3 items equally often', () => {
    const counts = new Map<string, number>();
    for (let p = 0; p < 12_000; p++) {
      const items = Uint16Array.of(0, 1, 2);
      shuffle(items, 0, 3, permutationGenerator('orders', 'trial-order', p));
      const key = items.join('');
      counts.set(key, (counts.get(key) ?? 0) + 1);
    }
    expect(counts.size).toBe(6);
    expect(chiSquare([...counts.values()])).toBeLessThan(chiSquareBound[5]);
  });

  test('moves items of its stretch only and keeps them all', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 20 }),
        fc.integer({ min: 0, max: 20 }),
        fc.integer({ min: 0, max: 10 }),
        (from, length, after) => {
          const items = Uint16Array.from({ length: from + length + after }, (_, i) => i);
          shuffle(items, from, from + length, permutationGenerator('s', 'x', length));
          const inside = [...items.subarray(from, from + length)].sort((a, b) => a - b);
          expect([...items.subarray(0, from)]).toEqual(range(0, from));
          expect(inside).toEqual(range(from, from + length));
          expect([...items.subarray(from + length)]).toEqual(
            range(from + length, from + length + after),
          );
        },
      ),
    );
  });
});

function range(from: number, to: number): number[] {
  return Array.from({ length: to - from }, (_, i) => from + i);
}
