import { execFileSync } from 'node:child_process';
import { describe, expect, test } from 'vitest';
import { groupLevel, type GroupDesign } from '../../workers/engine';
import { gridAxes, groupTest, participantsOf } from '../engine/group/cases';

/**
 * Outside values: SciPy's t (scipy.stats.ttest_1samp, ttest_ind) and, over all relabellings made by
 * itertools, p of each side and of the maximum |t|, by NumPy at test time. COMP.
 */

const script = `
import itertools, json, sys
import numpy as np
from scipy import stats
given = json.loads(sys.stdin.read())
x = np.array(given['rows'], dtype=float)
n = len(x)
if given['first'] is None:
    t_of = lambda signs: stats.ttest_1samp(x * np.array(signs)[:, None], 0).statistic
    identity = (1,) * n
    relabellings = list(itertools.product([1, -1], repeat=n))
else:
    def t_of(chosen):
        inside = np.isin(np.arange(n), chosen)
        return stats.ttest_ind(x[inside], x[~inside], equal_var=given['pooled']).statistic
    identity = tuple(given['first'])
    relabellings = list(itertools.combinations(range(n), len(identity)))
observed = t_of(identity)
t = np.array([t_of(each) for each in relabellings])
print(json.dumps({
    't': observed.tolist(),
    'upper': (t >= observed - 1e-9).sum(0).tolist(),
    'lower': (t <= observed + 1e-9).sum(0).tolist(),
    'maximum': [float((abs(t).max(1) >= abs(o) - 1e-9).mean()) for o in observed],
}))`;

interface Outside {
  t: number[];
  upper: number[];
  lower: number[];
  maximum: number[];
}

function outside(rows: number[][], design: GroupDesign): Outside {
  const first =
    design.kind === 'between' ? design.inFirst.flatMap((is, i) => (is ? [i] : [])) : null;
  const pooled = design.kind === 'between' && design.variance === 'pooled';
  const input = JSON.stringify({ rows, first, pooled });
  return JSON.parse(
    execFileSync('/usr/bin/python3', ['-c', script], { input, encoding: 'utf8' }),
  ) as Outside;
}

/** Small whole numbers, many of them tied, and all of them f32. */
const tied = [
  [3, -1, 2],
  [5, 2, 4],
  [4, -2, -1],
  [6, 1, 3],
  [2, 3, 5],
];
const unequal = [
  [7.25, 1, 5],
  [9.5, 4, 6.125],
  [8, 2, 9],
  [3, 3, 4],
  [4.75, -2, 6],
  [2, 5, 1],
  [-6, 15.5, 0.25],
  [1, 12, 2.5],
];
const firstThree = unequal.map((_, i) => i < 3);

describe.each<[string, number[][], GroupDesign]>([
  ['one sample, ties among the flips', tied, { kind: 'paired' }],
  ['one sample of 8', unequal, { kind: 'paired' }],
  ['3 against 5, pooled', unequal, { kind: 'between', inFirst: firstThree, variance: 'pooled' }],
  ['3 against 5, unequal', unequal, { kind: 'between', inFirst: firstThree, variance: 'unequal' }],
])('the group level, %s', (_, rows, design) => {
  const ours = groupLevel({
    axes: gridAxes(3, 1, 1),
    participants: participantsOf(rows),
    design,
    test: groupTest(),
  });
  const theirs = outside(rows, design);

  test("t is SciPy's, to f32", () => {
    theirs.t.forEach((t, i) => expect(ours.t[i]).toBeCloseTo(t, 5));
  });

  test('counts of each side and p of the maximum are those of the enumeration', () => {
    expect([...ours.upper].map((count) => count + 1)).toEqual(theirs.upper);
    expect([...ours.lower].map((count) => count + 1)).toEqual(theirs.lower);
    theirs.maximum.forEach((p, i) => {
      expect(ours.corrections[0]!.adjustedP[i]).toBeCloseTo(p, 7);
    });
  });
});
