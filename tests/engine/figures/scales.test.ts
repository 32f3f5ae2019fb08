import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { cellPaths } from '../../../src/lib/figures/cell-paths';
import {
  divergingFill,
  divergingLevel,
  levelCount,
  pLevel,
} from '../../../src/lib/figures/colour-levels';
import { frequencyTicks, visibleLabels } from '../../../src/lib/figures/tick-choice';

describe('divergingLevel', () => {
  test('is symmetric, zero at zero and full at the limit', () => {
    expect(divergingLevel(0, 5)).toBe(0);
    expect(divergingLevel(5, 5)).toBe(levelCount);
    fc.assert(
      fc.property(fc.double({ min: -20, max: 20, noNaN: true }), (z) => {
        expect(divergingLevel(-z, 5) + divergingLevel(z, 5)).toBeCloseTo(0, 12);
      }),
    );
  });

  test('holds values beyond the limit at its end, and takes no number for zero', () => {
    expect(divergingLevel(99, 5)).toBe(levelCount);
    expect(divergingLevel(-99, 5)).toBe(-levelCount);
    expect(divergingLevel(Number.NaN, 5)).toBe(0);
  });

  test("paints zero in the sheet's own colour", () => {
    expect(divergingFill(0)).toBe('var(--zero)');
    expect(divergingFill(levelCount)).toContain('var(--a) 100%');
    expect(divergingFill(-levelCount)).toContain('var(--b) 100%');
  });
});

describe('pLevel', () => {
  test('tells p that passes alpha from p that does not, alpha itself passing', () => {
    expect([0.2, 0.1, 0.06, 0.05, 0.011, 0.01, 0.001].map((p) => pLevel(p, 0.05))).toEqual([
      0, 1, 1, 2, 2, 3, 4,
    ]);
  });

  test('lets a p of alpha pass that was stored in single precision', () => {
    expect(Math.fround(0.05)).toBeGreaterThan(0.05);
    expect(pLevel(Math.fround(0.05), 0.05)).toBe(2);
  });
});

describe('cellPaths', () => {
  test('joins neighbours of one step in a row to one rectangle', () => {
    const paths = cellPaths({
      columns: 4,
      rows: 1,
      level: (column) => (column === 3 ? null : column === 0 ? 1 : 2),
      x: (column) => column * 10,
      y: (row) => row * 10,
    });
    expect(paths).toEqual([
      { level: 1, path: 'M0 0h10v10h-10z' },
      { level: 2, path: 'M10 0h20v10h-20z' },
    ]);
  });
});

describe('visibleLabels', () => {
  test('never lets two labels touch, and always shows the first that must', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 2, max: 128 }),
        fc.double({ min: 2, max: 30, noNaN: true }),
        fc.array(fc.nat(127), { maxLength: 2 }),
        (count, spacing, always) => {
          const shown = visibleLabels(count, spacing, 12, always);
          shown.slice(1).forEach((index, i) => {
            expect((index - shown[i]!) * spacing).toBeGreaterThanOrEqual(12 - 1e-9);
          });
          const first = always.find((index) => index < count);
          if (first !== undefined) expect(shown).toContain(first);
        },
      ),
    );
  });
});

describe('frequencyTicks', () => {
  test('puts round frequencies between the rows of a logarithmic grid', () => {
    const hz = [4, 8, 16, 32];
    // 14 of 40 pixels are 0.35 octaves: from 4 to 5 Hz it is 0.32, from 4 to 6 Hz 0.58.
    expect(frequencyTicks(hz, 40, 14).map((tick) => tick.hz)).toEqual([4, 6, 8, 12, 20, 30]);
    expect(frequencyTicks(hz, 40, 14).find((tick) => tick.hz === 8)?.row).toBe(1);
  });

  test('labels a grid without round frequencies by its ends', () => {
    expect(frequencyTicks([6.1, 6.5, 7.3], 20, 14)).toEqual([
      { hz: 6.1, row: 0 },
      { hz: 7.3, row: 2 },
    ]);
  });
});
