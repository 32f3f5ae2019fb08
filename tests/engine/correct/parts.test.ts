import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { permutationP, ties, type Plan } from '../../../workers/engine';
import { enhancedMap } from '../../../workers/engine/correct/threshold-free-enhancement';
import { clusterSize } from '../../../workers/engine/correct/cluster-size';
import { joinIntervals } from '../../../workers/engine/correct/intervals';
import {
  componentSizes,
  networkComponents,
} from '../../../workers/engine/correct/network-components';
import type { NullPart } from '../../../workers/engine/correct/part';
import { stepDownMaximum } from '../../../workers/engine/correct/step-down-maximum';
import { samplePlan } from '../sample-plan';
import { choices } from '../null/enumerated';
import { evidenceOf, plainAxes, plainMaps } from './evidence';

/** Gathers a part over null maps `[permutation][pair][feature]`, in blocks of so many pairs. */
function gathered(
  part: NullPart,
  axes: ReturnType<typeof plainAxes>,
  nullMaps: number[][][],
  options: { observed?: number[][]; blocks?: number[]; test?: Partial<Plan['test']> } = {},
): Float32Array {
  const test = { ...samplePlan().test, permutations: nullMaps.length, ...options.test };
  const context = { axes, test };
  let pair = 0;
  const shares = (options.blocks ?? [axes.pairs.length]).map((size) => {
    const gatherer = part.gatherer(context);
    for (let i = 0; i < size; i++, pair++) {
      gatherer.begin(pair, Float32Array.from(options.observed?.[pair] ?? nullMaps[0][pair]));
      nullMaps.forEach((maps, p) => gatherer.add(p, Float32Array.from(maps[pair])));
    }
    return gatherer.finish();
  });
  const merged = part.merge(shares, context);
  expect(part.fault(merged, context)).toBeNull();
  return merged;
}

const normal = fc
  .tuple(
    fc.double({ min: 1e-6, max: 1, noNaN: true }),
    fc.double({ min: 0, max: 6.28, noNaN: true }),
  )
  .map(([u, v]) => Math.fround(Math.sqrt(-2 * Math.log(u)) * Math.cos(v)));
const rows = (count: number, length: number) =>
  fc.array(fc.array(normal, { minLength: length, maxLength: length }), {
    minLength: count,
    maxLength: count,
  });

describe('step-down maxima', () => {
  const part = stepDownMaximum.part!;

  /** Step-down by its definition: successive maxima from the smallest observed up. */
  function naive(observed: number[], nullMaps: number[][]): number[] {
    const order = observed
      .map((_, x) => x)
      .sort((a, b) => Math.abs(observed[a]) - Math.abs(observed[b]));
    const counts = new Array<number>(observed.length).fill(0);
    for (const map of nullMaps) {
      let successive = -Infinity;
      for (const [place, x] of order.entries()) {
        successive = Math.max(successive, Math.abs(map[x]));
        // Equal observed values are one step: those at the same place up to the last count.
        const last = order.findLastIndex((y) => Math.abs(observed[y]) === Math.abs(observed[x]));
        if (place < last) continue;
        const reached = successive + ties.z >= Math.abs(observed[x]);
        for (const y of order) {
          if (Math.abs(observed[y]) === Math.abs(observed[x]) && reached) counts[y]++;
        }
      }
    }
    let most = 0;
    const p = new Array<number>(observed.length);
    for (const x of [...order].reverse()) {
      most = Math.max(most, counts[x]);
      p[x] = permutationP(most, nullMaps.length);
    }
    return p;
  }

  test('agree with the definition for any maps and any blocks', () => {
    fc.assert(
      fc.property(
        rows(4, 6),
        fc.array(rows(4, 6), { minLength: 19, maxLength: 19 }),
        (observed, nulls) => {
          const axes = plainAxes(4, 2, 3);
          const whole = gathered(part, axes, nulls, { observed });
          const split = gathered(part, axes, nulls, { observed, blocks: [1, 2, 1] });
          expect(split).toEqual(whole);
          const maps = plainMaps(19, {
            z: observed.flat(),
            parts: { [stepDownMaximum.id]: whole },
          });
          const { adjustedP } = stepDownMaximum.judge(evidenceOf(axes, maps));
          const expected = naive(
            observed.flat(),
            nulls.map((map) => map.flat()),
          );
          adjustedP.forEach((p, x) => expect(p).toBeCloseTo(expected[x], 6));
        },
      ),
      { numRuns: 60 },
    );
  });

  // reference-values, section 4 (04_multiple.json), by full enumeration. COMP. Our p adds 1 for the
  // identity, so it is one of the relabellings here and stands among the surrogates no more.
  test('of two samples are .10, .60, .30 by all 20 relabellings', () => {
    const X = [
      [7, 1, 5],
      [9, 4, 6],
      [8, 2, 9],
      [3, 3, 4],
      [4, 2, 6],
      [2, 5, 1],
    ];
    const statistic = (chosen: number[]) =>
      [0, 1, 2].map((column) => {
        const mean = (rowsOf: number[][]) => rowsOf.reduce((sum, r) => sum + r[column], 0) / 3;
        return Math.abs(
          mean(X.filter((_, i) => chosen.includes(i))) -
            mean(X.filter((_, i) => !chosen.includes(i))),
        );
      });
    const all = choices(6, 3);
    const observed = statistic([0, 1, 2]);
    const others = all.filter((chosen) => chosen.join() !== '0,1,2');
    const axes = plainAxes(1, 1, 3);
    const merged = gathered(
      part,
      axes,
      others.map((chosen) => [statistic(chosen)]),
      { observed: [observed] },
    );
    const maps = plainMaps(19, { z: observed, parts: { [stepDownMaximum.id]: merged } });
    const { adjustedP } = stepDownMaximum.judge(evidenceOf(axes, maps));
    [0.1, 0.6, 0.3].forEach((p, x) => expect(adjustedP[x]).toBeCloseTo(p, 6));
  });

  test('refuse lists that no run can have made', () => {
    const context = { axes: plainAxes(1, 1, 1), test: { ...samplePlan().test, permutations: 2 } };
    expect(part.fault(Float32Array.of(1, 0, 2, 0), context)).toBeNull();
    expect(part.fault(Float32Array.of(1, 2, 0, 0), context)).toContain('do not ascend');
    expect(part.fault(Float32Array.of(1, 0, 2), context)).toContain('do not fit');
    expect(part.fault(Float32Array.of(0, 0, 1), context)).toContain('too many');
  });
});

test('joined intervals cover what either covers, in order and apart', () => {
  const union = fc
    .array(fc.integer({ min: 0, max: 50 }), { maxLength: 8 })
    .map((list) => [...new Set(list)].sort((a, b) => a - b))
    .map((list) => list.slice(0, list.length - (list.length % 2)));
  const covers = (list: number[], value: number) =>
    list.some((from, i) => i % 2 === 0 && from <= value && value <= list[i + 1]);
  fc.assert(
    fc.property(union, union, (a, b) => {
      const both = joinIntervals(a, b);
      for (let value = 0; value <= 50; value += 0.5) {
        expect(covers(both, value)).toBe(covers(a, value) || covers(b, value));
      }
      both.forEach((end, i) => i > 0 && expect(end).toBeGreaterThanOrEqual(both[i - 1]));
    }),
  );
});

describe('cluster size', () => {
  test('takes the largest cluster of either sign of any pair, whatever the blocks', () => {
    const axes = plainAxes(2, 2, 3);
    const nulls = [
      [
        [3, 3, 0, 3, 0, -4],
        [0, 0, 0, 0, 0, 0],
      ],
      [
        [3, -3, 3, 0, 3, 0],
        [-3, -3, -3, -3, 0, 0],
      ],
    ];
    expect(gathered(clusterSize.part!, axes, nulls)).toEqual(Float32Array.of(3, 4));
    expect(gathered(clusterSize.part!, axes, nulls, { blocks: [1, 1] })).toEqual(
      Float32Array.of(3, 4),
    );
    const oneSided = { test: { tail: 'a-greater' as const } };
    expect(gathered(clusterSize.part!, axes, nulls, oneSided)).toEqual(Float32Array.of(3, 1));
  });

  test('judges the observed clusters by their number of points', () => {
    const axes = plainAxes(1, 1, 5);
    const sizes = Float32Array.from({ length: 99 }, (_, i) => (i < 3 ? 2 : 1));
    const z = [3, 3, 0, -9, 0];
    const maps = plainMaps(99, { z, parts: { [clusterSize.id]: sizes } });
    const outcome = clusterSize.judge(evidenceOf(axes, maps));
    expect([...outcome.adjustedP]).toEqual([0.04, 0.04, 1, 1, 1].map(Math.fround));
    expect(outcome.edges.map((edge) => edge.points)).toEqual([2]);
    expect(outcome.criticalValue).toBe(2);
  });
});

describe('network components', () => {
  // reference-values, section 9 (09_clusters.json): AB BC DE EF DF and isolated G. COMP
  const axes = {
    ...plainAxes(1, 1, 2),
    sites: ['A', 'B', 'C', 'D', 'E', 'F', 'G'],
    pairs: [
      [0, 1],
      [1, 2],
      [3, 4],
      [4, 5],
      [3, 5],
      [0, 6],
    ] as [number, number][],
  };

  test('of the stated graph have 2, 3 and no edges', () => {
    expect([...componentSizes(axes, [0, 1, 2, 3, 4])]).toEqual([2, 2, 3, 3, 3]);
    expect([...componentSizes(axes, [])]).toEqual([]);
  });

  test('are found across blocks of pairs, at each time and sign apart', () => {
    const nulls = [
      [
        [3, 0],
        [3, 0],
        [0, 3],
        [3, 3],
        [0, 3],
        [0, 0],
      ],
      [
        [3, 0],
        [-3, 0],
        [0, 0],
        [0, 0],
        [0, 0],
        [3, 0],
      ],
    ];
    for (const blocks of [[6], [1, 2, 3], [3, 3]]) {
      expect(gathered(networkComponents.part!, axes, nulls, { blocks })).toEqual(
        Float32Array.of(3, 2),
      );
    }
  });

  test('claim every edge of a large component and none of a small one', () => {
    const z = [
      [3, 0],
      [3, 0],
      [0, 3],
      [0, 3],
      [0, 3],
      [0, 0],
    ].flat();
    const maxima = Float32Array.from({ length: 99 }, () => 2);
    const maps = plainMaps(99, { z, parts: { [networkComponents.id]: maxima } });
    const outcome = networkComponents.judge(evidenceOf(axes, maps));
    expect(outcome.edges.map((edge) => edge.pair)).toEqual([2, 3, 4]);
    expect(outcome.adjustedP[5]).toBeCloseTo(0.01, 6);
    expect(outcome.adjustedP[0]).toBe(1);
  });
});

test('enhancement keeps signs apart and gives nothing below the first height', () => {
  const axes = plainAxes(1, 1, 4);
  const z = Float32Array.of(0.05, 2, -2, 0);
  const maps = { ...plainMaps(19, { z: [...z] }) };
  const enhanced = enhancedMap({ axes, maps, tail: 'two-sided' });
  expect(enhanced[0]).toBe(0);
  expect(enhanced[1]).toBeGreaterThan(0);
  expect(enhanced[2]).toBe(enhanced[1]);
});
