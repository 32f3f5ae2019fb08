import { describe, expect, test } from 'vitest';
import { smallestAdjustedP, smallestP } from '../../../workers/engine/consequences/reach';
import { chanceIspc, criticalIspc, differenceSd } from '../../../workers/engine/numbers/chance';
import { nullModelOf, type NullId } from '../../../workers/engine/null/registry';
import { logChoose } from '../../../workers/engine/numbers/counting';
import { samplePlan } from '../sample-plan';

const shape = (change: object) => ({ ...samplePlan().test, ...change });

describe('chance', () => {
  test.each([
    // reference-values.md section 6: exact E[R] by chance (n = 3: OEIS A240946 / 3, REP).
    [3, 0.524866],
    [5, 0.401632],
    [10, 0.282035],
    [30, 0.162141],
    [100, 0.0886782],
  ])('the expected ISPC of %i epochs is within 3 %% of the exact value', (epochs, exact) => {
    expect(Math.abs(chanceIspc(epochs) / exact - 1)).toBeLessThan(0.03);
  });

  test.each([
    // reference-values.md section 5, last column.
    [10, 0.05, 0.54733],
    [20, 0.01, 0.47985],
    [100, 0.001, 0.26283],
    [200, 0.05, 0.12239],
  ])('the critical ISPC of %i epochs at %f is the Rayleigh approximation', (epochs, p, value) => {
    expect(criticalIspc(epochs, p)).toBeCloseTo(value, 5);
  });

  test('the critical ISPC is never above 1, where the approximation leaves its range', () => {
    // sqrt(-ln .01 / 4) is 1.073.
    expect(criticalIspc(4, 0.01)).toBe(1);
  });

  test('the sd of a difference follows from E[R^2] = 1/N and E[R] = sqrt(pi / 4N)', () => {
    const variance = (n: number) => 1 / n - chanceIspc(n) ** 2;
    expect(differenceSd(118, 121) ** 2).toBeCloseTo(variance(118) + variance(121), 12);
  });
});

describe('reach', () => {
  test('the number of relabellings is exact as far as doubles count', () => {
    expect(Math.exp(logChoose(15, 7))).toBeCloseTo(6435, 6);
    expect(Math.exp(logChoose(49, 6)) / 13_983_816).toBeCloseTo(1, 9);
    const shape = { permutations: 9, siteCount: 2, epochsA: 4, epochsB: 5, windowSamples: 3 };
    const arrangements = (id: NullId) => Math.exp(nullModelOf(id).logArrangements(shape));
    expect(arrangements('labels')).toBeCloseTo(126, 9);
    expect(arrangements('trial-order')).toBeCloseTo(24 * 120, 6);
    expect(arrangements('time-shift')).toBeCloseTo(3 ** 9, 6);
  });

  test('two-sided p of one test cannot be below twice one in all permutations', () => {
    const many = Math.log(1e9);
    expect(smallestP(shape({ permutations: 999 }), many)).toBeCloseTo(0.002, 12);
    expect(smallestP(shape({ permutations: 999, tail: 'a-greater' }), many)).toBeCloseTo(0.001, 12);
  });

  test('no p is below one in all arrangements, however many permutations are asked for', () => {
    const twenty = Math.log(20);
    const test = shape({ permutations: 99_999, tail: 'a-greater' });
    expect(smallestP(test, twenty)).toBeCloseTo(0.05, 12);
    expect(smallestAdjustedP(test, 'max-statistic', twenty, true)).toBeCloseTo(0.05, 12);
  });

  test('a maximum counts both signs at once, and its mirrored relabelling', () => {
    const test = shape({ permutations: 4999 });
    expect(smallestAdjustedP(test, 'cluster-mass', Math.log(1e9), true)).toBeCloseTo(1 / 5000, 12);
    expect(smallestAdjustedP(test, 'max-statistic', Math.log(20), true)).toBeCloseTo(0.1, 12);
    expect(smallestAdjustedP(test, 'max-statistic', Math.log(20), false)).toBeCloseTo(0.05, 12);
  });
});
