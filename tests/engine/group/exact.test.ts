import { describe, expect, test } from 'vitest';
import { groupLevel, type GroupDesign } from '../../../workers/engine';
import { gridAxes, groupTest, participantsOf } from './cases';

/**
 * Full enumerations with outside values. Counts are of the statistic's own tail among all
 * relabellings, the identity included. REP: published and reproduced; MEM: from memory; COMP: computed
 * only (SciPy 1.10.1, exactRankTests 0.8-35, coin 1.4-2).
 */

const axes = gridAxes(1, 1, 1);

/** One feature: the count at or above the observed t, and of |t| through the maximum. */
function counts(values: number[], design: GroupDesign) {
  const outcome = groupLevel({
    axes,
    participants: participantsOf(values.map((value) => [value])),
    design,
    test: groupTest(),
  });
  const { count, exact } = outcome.relabellings;
  expect(exact).toBe(true);
  const total = count + 1;
  return {
    total,
    above: outcome.upper[0]! + 1,
    below: outcome.lower[0]! + 1,
    twoSided: Math.round(outcome.corrections[0]!.adjustedP[0]! * total),
    p: outcome.p[0],
  };
}

describe('sign flips of paired differences, all of them', () => {
  const paired = { kind: 'paired' } as const;

  test.each([
    // Fisher 1935, section 21; counts MEM, three tools agree.
    [
      "Darwin's plants",
      [49, -67, 8, 16, 6, 23, 28, 41, 14, 29, 56, 24, 75, 60, -48],
      { total: 32768, above: 863, twoSided: 1726 },
    ],
    // Student 1908, R datasets::sleep; COMP.
    ['sleep', [1.2, 2.4, 1.3, 1.3, 0, 1, 1.8, 0.8, 4.6, 1.4], { total: 1024, twoSided: 4 }],
    // Mehta and Patel 2001, table 8.1, zero differences dropped; .0011 and .0021 published, REP.
    [
      'serum antigen',
      [149, -51, -126, 106, 20, 52, 292, 103, 84, 89, 159, 404, 500, 259, 14, 2600],
      { total: 65536, above: 70, twoSided: 140 },
    ],
  ])('%s', (_, values, expected) => {
    expect(counts(values, paired)).toMatchObject(expected);
  });

  test('a p of two sides is twice the smaller side, exactly', () => {
    expect(counts([1.2, 2.4, 1.3, 1.3, 0, 1, 1.8, 0.8, 4.6, 1.4], paired).p).toBe(4 / 1024);
  });
});

describe('group labels, all of them', () => {
  test.each([
    // Efron and Tibshirani 1993, table 2.1; COMP, three tools agree.
    [
      'mouse survival',
      [94, 197, 16, 38, 99, 141, 23],
      [52, 104, 146, 10, 51, 30, 40, 27, 46],
      { total: 11440, above: 1613, below: 9853, twoSided: 3184 },
    ],
    // Mehta and Patel 2001, table 9.6; .0564 and .1040 published, REP.
    [
      'blood pressure',
      [94, 108, 110, 90],
      [80, 94, 85, 90, 90, 90, 108, 94, 78, 105, 88],
      { total: 1365, above: 77, below: 1312, twoSided: 142 },
    ],
    // Pitman 1937; data MEM.
    [
      "Pitman's example",
      [0, 11, 12, 20],
      [16, 19, 22, 24, 29],
      { total: 126, above: 124, below: 3, twoSided: 5 },
    ],
  ])('%s', (_, first, second, expected) => {
    const inFirst = [...first.map(() => true), ...second.map(() => false)];
    const design: GroupDesign = { kind: 'between', inFirst, variance: 'pooled' };
    expect(counts([...first, ...second], design)).toMatchObject(expected);
    // The order in which participants are given changes nothing.
    const turned: GroupDesign = { ...design, inFirst: [...inFirst].reverse() };
    expect(counts([...second].reverse().concat([...first].reverse()), turned)).toMatchObject(
      expected,
    );
  });
});

describe('several features', () => {
  const three = gridAxes(3, 1, 1);

  test('sign flips, 5 participants by 3: each raw p by enumeration (COMP, 04_multiple)', () => {
    const rows = [
      [3, -1, 2],
      [5, 2, 4],
      [4, -2, -1],
      [6, 1, 3],
      [2, 3, 5],
    ];
    const { p, corrections } = groupLevel({
      axes: three,
      participants: participantsOf(rows),
      design: { kind: 'paired' },
      test: groupTest(),
    });
    expect([...p]).toEqual([0.0625, 0.6875, 0.125]);
    // Of |t|, which weighs the features alike; NumPy, tests/reference/group.test.ts.
    expect([...corrections[0]!.adjustedP]).toEqual([0.0625, 0.9375, 0.1875]);
  });

  test('two groups, 3 against 3 by 3: each raw p by enumeration (COMP, 04_multiple)', () => {
    const rows = [
      [7, 1, 5],
      [9, 4, 6],
      [8, 2, 9],
      [3, 3, 4],
      [4, 2, 6],
      [2, 5, 1],
    ];
    const { p } = groupLevel({
      axes: three,
      participants: participantsOf(rows),
      design: {
        kind: 'between',
        inFirst: [true, true, true, false, false, false],
        variance: 'pooled',
      },
      test: groupTest(),
    });
    [0.1, 0.6, 0.3].forEach((expected, i) => expect(p[i]).toBeCloseTo(expected, 7));
  });
});
