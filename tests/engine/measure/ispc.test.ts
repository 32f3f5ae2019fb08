import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { measures } from '../../../workers/engine';
import { sumCrossTerms } from '../../../workers/kernels/cross-sums';
import { resultantLengths } from '../../../workers/kernels/resultants';

/** ISPC of phase differences in degrees. */
function ispcOf(differencesDeg: number[]): number {
  const n = differencesDeg.length;
  const rad = differencesDeg.map((deg) => (deg * Math.PI) / 180);
  // Site k has its own phase in each epoch; only the difference may count.
  const phasors = Float32Array.from([
    ...rad.flatMap((d, i) => [Math.cos(d + i), Math.sin(d + i)]),
    ...rad.flatMap((_, i) => [Math.cos(i), Math.sin(i)]),
  ]);
  const starts = Int32Array.from({ length: n }, (_, i) => 2 * i);
  const sums = new Float64Array(2);
  const values = new Float64Array(1);
  const partner = starts.map((start) => start + 2 * n);
  sumCrossTerms(phasors, starts, partner, sums, { epochCount: n, sampleCount: 1, partDistance: 1 });
  resultantLengths(sums, n, values, 1);
  return values[0];
}

describe('ISPC over trials', () => {
  // Closed forms of the resultant length of unit vectors (reference-values, section 6). COMP.
  // Phasors are stored in f32, 6e-8 each: equal to 1e-6.
  const closedForms: [string, number[], number][] = [
    ['a constant lag of 90 degrees', new Array<number>(8).fill(90), 1],
    ['a constant lag of 180 degrees', new Array<number>(8).fill(180), 1],
    ['a constant lag of 45 degrees, an odd count', new Array<number>(5).fill(45), 1],
    ['0, 90, 180, 270 degrees', [0, 90, 180, 270], 0],
    ['+60 and -60, twice', [60, -60, 60, -60], 0.5],
    ['+90 three times, -90 once', [90, 90, 90, -90], 0.5],
    ['0, 0, 90, 90', [0, 0, 90, 90], Math.SQRT1_2],
  ];
  for (const [name, differences, expected] of closedForms) {
    test(`of ${name} is ${expected.toFixed(4)}`, () => {
      expect(Math.abs(ispcOf(differences) - expected)).toBeLessThan(1e-6);
    });
  }

  test('does not change when all differences turn by one angle, and stays in 0 .. 1', () => {
    const angle = fc.double({ min: -180, max: 180, noNaN: true });
    fc.assert(
      fc.property(fc.array(angle, { minLength: 2, maxLength: 30 }), angle, (differences, turn) => {
        const value = ispcOf(differences);
        const turned = ispcOf(differences.map((difference) => difference + turn));
        expect(value).toBeGreaterThanOrEqual(0);
        expect(value).toBeLessThanOrEqual(1);
        expect(Math.abs(value - turned)).toBeLessThan(1e-6);
      }),
    );
  });
});

describe('every measure', () => {
  for (const measure of measures) {
    test(`${measure.id} says what it is, where it comes from and how far it goes`, () => {
      expect(measure.sentence).toMatch(/\.$/);
      expect(measure.formula.length).toBeGreaterThan(5);
      expect(measure.source).toMatch(/\d{4}|common practice/);
      expect(measure.range[0]).toBeLessThan(measure.range[1]);
      expect(measure.termCount).toBeGreaterThanOrEqual(1);
      expect(measure.termCount).toBeLessThanOrEqual(8);
    });
  }
});
