import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { corrections, permutationP, ties } from '../../../workers/engine';
import { benjaminiHochberg } from '../../../workers/engine/correct/benjamini-hochberg';
import { adjustFalseDiscovery } from '../../../workers/engine/correct/false-discovery';
import { clusterMass } from '../../../workers/engine/correct/cluster-mass';
import { maxStatistic } from '../../../workers/engine/correct/max-statistic';
import { evidenceOf, plainAxes, plainMaps } from './evidence';
import { choices } from '../null/enumerated';

describe('maximum statistic', () => {
  // reference/04_multiple.json: two samples, 6 x 3, first three rows against the rest, all 20
  // relabellings, |mean difference|; statsmodels 0.13.5 and NumPy. COMP
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
      const sum = (rows: number[][]) => rows.reduce((total, row) => total + row[column], 0) / 3;
      const inside = X.filter((_, row) => chosen.includes(row));
      return Math.abs(sum(inside) - sum(X.filter((_, row) => !chosen.includes(row))));
    });

  test('gives the adjusted p of the worked example over all 20 relabellings', () => {
    const others = choices(6, 3).filter((chosen) => chosen.join() !== '0,1,2');
    const maps = plainMaps(19, {
      z: statistic([0, 1, 2]),
      maxStatistic: others.map((chosen) => Math.max(...statistic(chosen))),
    });
    const { adjustedP } = maxStatistic.judge(evidenceOf(plainAxes(1, 1, 3), maps));
    expect(others.length).toBe(19);
    expect([...adjustedP].map((p) => Number(p.toFixed(6)))).toEqual([0.1, 0.9, 0.3]);
  });

  test('claims exactly the points whose adjusted p passes, and states the value they must leave behind', () => {
    // 99 permutations, alpha .05: at most 4 maxima may reach a claimed point.
    const maxima = Array.from({ length: 99 }, (_, p) => 1 + p / 100);
    const critical = 1 + 94 / 100;
    const z = [critical + 0.001, critical - 0.001, 0, -(critical + 0.002)];
    const outcome = maxStatistic.judge(
      evidenceOf(plainAxes(1, 1, 4), plainMaps(99, { z, maxStatistic: maxima })),
    );
    expect(outcome.criticalValue).toBeCloseTo(critical, 6);
    expect(outcome.smallestDifference).toBeCloseTo(critical * 0.05, 6);
    expect(outcome.edges.map((edge) => [edge.peakPoint, edge.adjustedP])).toEqual([
      [0, 0.05],
      [3, 0.05],
    ]);
    expect(outcome.adjustedP[1]).toBeCloseTo(0.06, 6);
  });

  test('counts a maximum that equals the point but for rounding', () => {
    const maxStatisticOf = (away: number) =>
      Array.from({ length: 99 }, (_, p) => (p ? 1 : 3 + away));
    const p = (away: number) =>
      maxStatistic.judge(
        evidenceOf(
          plainAxes(1, 1, 1),
          plainMaps(99, { z: [3], maxStatistic: maxStatisticOf(away) }),
        ),
      ).adjustedP[0];
    expect(p(-0.9 * ties.z)).toBeCloseTo(0.02, 6);
    expect(p(-1.1 * ties.z)).toBeCloseTo(0.01, 6);
  });

  test('looks at the side of the tail only', () => {
    const maps = plainMaps(99, { z: [9, 0, -9] });
    const edges = (tail: 'a-greater' | 'b-greater') =>
      maxStatistic.judge(evidenceOf(plainAxes(1, 1, 3), maps, { tail })).edges;
    expect(edges('a-greater').map((edge) => edge.z)).toEqual([9]);
    expect(edges('b-greater').map((edge) => edge.z)).toEqual([-9]);
  });

  test('says that nothing can pass when there are too few permutations', () => {
    const maps = plainMaps(19, { z: [99, 99, 99] });
    const outcome = maxStatistic.judge(evidenceOf(plainAxes(1, 1, 3), maps, { alpha: 0.04 }));
    expect(outcome.edges).toEqual([]);
    expect(outcome.criticalValue).toBeNull();
    expect(outcome.smallestDifference).toBeNull();
  });
});

describe('Benjamini-Hochberg', () => {
  // Benjamini and Hochberg 1995, section 4: 15 p, of which 4 are rejected at .05 (REP); adjusted
  // values by statsmodels 0.13.5 (COMP).
  const p = [
    0.0001, 0.0004, 0.0019, 0.0095, 0.0201, 0.0278, 0.0298, 0.0344, 0.0459, 0.324, 0.4262, 0.5719,
    0.6528, 0.759, 1,
  ];
  const adjusted = [
    0.0015, 0.003, 0.0095, 0.035625, 0.0603, 0.06385714285714286, 0.06385714285714286, 0.0645,
    0.07650000000000001, 0.48600000000000004, 0.5811818181818182, 0.7148749999999999,
    0.7532307692307693, 0.8132142857142857, 1,
  ];

  test('adjusts the published example, in any order', () => {
    const order = p.map((_, i) => (i * 7) % 15);
    const found = adjustFalseDiscovery(Float64Array.from(order, (i) => p[i]));
    order.forEach((i, at) => expect(found[at]).toBeCloseTo(adjusted[i], 12));
    expect(found.filter((value) => value <= 0.05).length).toBe(4);
  });

  test('gives equal p one adjusted value, never below p, in the order of p', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 1, max: 20 }), { minLength: 1 }), (list) => {
        const given = Float64Array.from(list, (value) => value / 20);
        const found = adjustFalseDiscovery(given);
        for (let i = 0; i < given.length; i++) {
          expect(found[i]).toBeGreaterThanOrEqual(given[i] - 1e-12);
          for (let k = 0; k < given.length; k++) {
            if (given[i] === given[k]) expect(found[i]).toBe(found[k]);
            if (given[i] < given[k]) expect(found[i]).toBeLessThanOrEqual(found[k]);
          }
        }
      }),
    );
  });

  test('claims the points that pass and has no interval for them', () => {
    const upper = [0, 0, 60, 95];
    const lower = [99, 99, 40, 5];
    const maps = plainMaps(99, { z: [4, 3, 0.1, -1.6], upper, lower });
    const outcome = benjaminiHochberg.judge(evidenceOf(plainAxes(1, 1, 4), maps));
    expect(outcome.edges.length).toBe(1);
    expect(outcome.edges[0]).toMatchObject({ points: 2, peakPoint: 0, adjustedPInterval: null });
    expect(outcome.edges[0].adjustedP).toBeCloseTo(0.04, 12);
    expect(outcome.criticalValue).toBe(3);
  });

  test('without claims, states a value above every surrogate, or that no lone point can pass', () => {
    const axes = plainAxes(1, 1, 4);
    const maps = (permutations: number) =>
      plainMaps(permutations, {
        z: [1, 1, 1, 1],
        upper: new Array<number>(4).fill(permutations),
        maxStatistic: new Array<number>(permutations).fill(3.5),
      });
    expect(benjaminiHochberg.judge(evidenceOf(axes, maps(99))).criticalValue).toBeNull();
    const reachable = benjaminiHochberg.judge(evidenceOf(axes, maps(999)));
    expect(reachable.criticalValue).toBeCloseTo(3.5 + ties.z, 6);
  });
});

describe('cluster mass', () => {
  // reference/09_clusters.json, SciPy 1.10.1 ndimage.label with the 4-neighbourhood. COMP
  const z = [2.5, 3, 0.1, -2.6, 0.2, 2.1, 0.3, -3.1, 2.2, 0, 2.4, 2.9];

  test('finds the clusters and masses of the worked example', () => {
    const { clusters } = evidenceOf(plainAxes(1, 3, 4), plainMaps(99, { z }));
    expect(clusters.map(({ sign, mass }) => [sign, Number(mass.toFixed(5))])).toEqual([
      [1, 7.6],
      [-1, 5.7],
      [1, 5.3],
      [1, 2.2],
    ]);
    expect(clusters.map((cluster) => cluster.points)).toEqual([[0, 1, 5], [3, 7], [10, 11], [8]]);
  });

  test('keeps to the sign of the tail', () => {
    const maps = plainMaps(99, { z });
    const signs = (tail: 'a-greater' | 'b-greater') =>
      evidenceOf(plainAxes(1, 3, 4), maps, { tail }).clusters.map((cluster) => cluster.sign);
    expect(signs('a-greater')).toEqual([1, 1, 1]);
    expect(signs('b-greater')).toEqual([-1]);
  });

  test('never joins points of different pairs, nor the end of a row with the next', () => {
    const flat = new Array<number>(12).fill(0);
    flat[3] = 5; // last time of the first frequency
    flat[4] = 5; // first time of the second
    flat[11] = 5;
    const two = [...flat, 5, ...new Array<number>(11).fill(0)];
    const { clusters } = evidenceOf(plainAxes(2, 3, 4), plainMaps(99, { z: two }));
    expect(clusters.map((cluster) => [cluster.pair, cluster.size])).toEqual([
      [0, 1],
      [0, 1],
      [0, 1],
      [1, 1],
    ]);
  });

  test('claims clusters whose mass few permutations reach, ties counted', () => {
    const masses = Array.from({ length: 99 }, (_, p) => (p < 4 ? 9 : p === 4 ? 5.7 : 1));
    const maps = plainMaps(99, { z, maxClusterMass: masses });
    const evidence = evidenceOf(plainAxes(1, 3, 4), maps);
    const outcome = clusterMass.judge(evidence);
    expect(evidence.clusters.map((cluster) => cluster.exceedances)).toEqual([4, 5, 5, 5]);
    expect(outcome.edges.length).toBe(1);
    expect(outcome.edges[0]).toMatchObject({
      cluster: 0,
      points: 3,
      peakPoint: 1,
      fromHz: 4,
      toHz: 6,
      fromS: 0,
      toS: 0.1,
      adjustedP: permutationP(4, 99),
    });
    expect(outcome.criticalValue).toBeCloseTo(5.7, 3);
    expect([...outcome.adjustedP].map((p) => Number(p.toFixed(4)))).toEqual([
      0.05, 0.05, 1, 0.06, 1, 0.05, 1, 0.06, 0.06, 1, 0.06, 0.06,
    ]);
  });
});

describe('every correction', () => {
  for (const correction of corrections) {
    test(`${correction.id} says what it keeps and where it comes from`, () => {
      expect(['family-wise', 'false discovery']).toContain(correction.family);
      expect(correction.sentence).toMatch(/\.$/);
      expect(correction.source).toMatch(/\d{4}/);
    });
  }
});
