import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { packEdges, unpackEdges } from '../../../src/lib/model/packed-edges';
import { matrixOrder, pairLookup } from '../../../src/lib/result/matrix-order';
import { claimedLagRad, isNearZeroLag, lagMs } from '../../../src/lib/result/zero-lag';
import { headEdges, mostCurves, strongestByPair } from '../../../src/lib/result/summaries';
import { positionOfSite } from '../../../workers/engine';
import { sampleEdge } from './sample-edge';

describe('packEdges', () => {
  test('is undone by unpackEdges, absent values included', () => {
    const edges = [
      sampleEdge({ pair: 3, cluster: 2, adjustedPLow: 0.01, adjustedPHigh: 0.03 }),
      sampleEdge({ pair: 0, cluster: null, adjustedPLow: null, adjustedPHigh: null }),
    ];
    expect(unpackEdges(packEdges(edges))).toEqual(edges);
    expect(unpackEdges(packEdges([]))).toEqual([]);
  });
});

describe('matrixOrder', () => {
  const sites = ['O1', 'Cz', 'Fp2', 'unknown', 'Fp1', 'C4'];
  const positions = sites.map((site) => positionOfSite(site) ?? null);
  const named = (order: Parameters<typeof matrixOrder>[1]) =>
    matrixOrder(positions, order).map((i) => sites[i]);

  test('keeps the order of the plan', () => {
    expect(named('plan')).toEqual(sites);
  });

  test('goes from the nose to the back, rows from left to right, unknown places last', () => {
    expect(named('front-to-back')).toEqual(['Fp1', 'Fp2', 'Cz', 'C4', 'O1', 'unknown']);
  });

  test('goes from the left half over the midline to the right half', () => {
    expect(named('left-to-right')).toEqual(['Fp1', 'O1', 'Cz', 'Fp2', 'C4', 'unknown']);
  });
});

describe('pairLookup', () => {
  test('finds a pair from either side, in the order of display', () => {
    const at = pairLookup(
      [
        [0, 1],
        [1, 2],
      ],
      3,
      [2, 0, 1],
    );
    expect(at(1, 2)).toBe(0);
    expect(at(2, 1)).toBe(0);
    expect(at(0, 2)).toBe(1);
    expect(at(0, 1)).toBe(-1);
    expect(at(0, 0)).toBe(-1);
  });
});

describe('lags', () => {
  test('count as near zero within 15 degrees of zero and of half a turn', () => {
    const degrees = [0, 14.9, -14.9, 15.1, 90, 165.1, 180, -165.1, 164.9];
    expect(degrees.map((d) => isNearZeroLag((d * Math.PI) / 180))).toEqual([
      true,
      true,
      true,
      false,
      false,
      true,
      true,
      true,
      false,
    ]);
  });

  test('are those of the condition with more synchrony', () => {
    const lags = { lagARad: 1, lagBRad: -2 };
    expect(claimedLagRad(sampleEdge({ ...lags, difference: 0.2 }))).toBe(1);
    expect(claimedLagRad(sampleEdge({ ...lags, difference: -0.2 }))).toBe(-2);
  });

  test('become milliseconds at their frequency: a quarter turn at 10 Hz is 25 ms', () => {
    expect(lagMs(Math.PI / 2, 10)).toBeCloseTo(25, 12);
  });
});

describe('strongestByPair', () => {
  test('keeps one edge a pair, the strongest of it, strongest pair first', () => {
    const edges = [
      sampleEdge({ pair: 1, z: 3 }),
      sampleEdge({ pair: 2, z: -5 }),
      sampleEdge({ pair: 1, z: -4 }),
    ];
    expect(strongestByPair(edges).map(({ pair, z }) => [pair, z])).toEqual([
      [2, -5],
      [1, -4],
    ]);
  });

  test('gives the head at most as many claimed curves as stay readable', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 400 }), (count) => {
        const edges = Array.from({ length: count }, (_, pair) => sampleEdge({ pair, z: 4 }));
        const values = {
          z: new Float32Array(500).fill(1),
          adjustedP: new Float32Array(500).fill(1),
          point: new Int32Array(500),
        };
        const drawn = headEdges(strongestByPair(edges), values);
        const claimed = drawn.filter((edge) => edge.survives);
        expect(claimed.length).toBe(Math.min(count, mostCurves));
        expect(new Set(drawn.map((edge) => edge.pair)).size).toBe(drawn.length);
      }),
      { numRuns: 30 },
    );
  });
});
