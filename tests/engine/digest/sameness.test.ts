import fc from 'fast-check';
import { beforeAll, describe, expect, test } from 'vitest';
import {
  computePairs,
  conclude,
  correctionIds,
  concludeFrom,
  drawPermutations,
  drawsByteLength,
  mergeBlocks,
  nullIds,
  type CorrectionId,
  type Outcome,
  type PairBlock,
} from '../../../workers/engine';
import { drawAll, mapsOf, noise, outcomeOf, tinyRun, type TinyRun } from '../null/tiny-run';

/** Cuts 0 .. count into neighbouring ranges at any places. */
function anyRanges(count: number): fc.Arbitrary<{ from: number; to: number }[]> {
  return fc.uniqueArray(fc.integer({ min: 1, max: count - 1 }), { maxLength: 5 }).map((cuts) => {
    const edges = [0, ...cuts.sort((a, b) => a - b), count];
    return edges.slice(1).map((to, i) => ({ from: edges[i], to }));
  });
}

const anyOrder = <T>(list: T[]) =>
  fc.shuffledSubarray(list, { minLength: list.length, maxLength: list.length });

const permutations = 399;

const everything = {
  corrections: [...correctionIds],
  clusterFormingZ: 1.5,
  alpha: 0.05,
  permutations,
};

/**
 * In A, sites 1 and 2 share a phase that is another one in each epoch; all else is noise. So there
 * is something to claim under every null, beyond what a locking to the event would make.
 */
function planted(nullId: (typeof nullIds)[number]): TinyRun {
  const random = noise(`planted ${nullId}`);
  const options = { nullId, siteCount: 4, epochsA: 30, epochsB: 24, test: everything };
  return tinyRun((site, epoch, f, s) => {
    const own = random(site, epoch, f, s);
    return epoch < 30 && site < 2 ? 2.4 * epoch + 0.4 * s + 0.15 * own : own;
  }, options);
}

describe.each(nullIds)('a run under %s', (nullId) => {
  let run: TinyRun;
  let expected: Outcome;

  beforeAll(async () => {
    run = planted(nullId);
    expected = await outcomeOf(run);
  });

  test('has the same outcome for any split of pairs into blocks and permutations into ranges', async () => {
    const splits = fc
      .tuple(anyRanges(6), anyRanges(permutations))
      .chain(([pairs, draws]) => fc.tuple(anyOrder(pairs), anyOrder(draws)));
    await fc.assert(
      fc.asyncProperty(splits, async ([pairRanges, drawRanges]) => {
        const draws = new SharedArrayBuffer(drawsByteLength(run.plan, run.axes, run.counts));
        for (const range of drawRanges) {
          drawPermutations(run.plan, run.axes, run.counts, range, draws);
        }
        const phases = { buffer: run.phases, ...run.counts };
        const blocks = pairRanges.map((range) =>
          computePairs(run.plan, run.axes, range, phases, { buffer: draws }),
        );
        const maps = mergeBlocks(blocks, run.axes, run.plan.test);
        expect(await conclude(run.plan, run.axes, run.counts, maps)).toEqual(expected);
      }),
      { numRuns: 15 },
    );
  });

  test('claims the planted pair, and no other where the family-wise error is kept', () => {
    const claimed = (id: CorrectionId) =>
      new Set(expected.corrections.find((each) => each.id === id)!.edges.map((edge) => edge.pair));
    expect(claimed('max-statistic')).toEqual(new Set([0]));
    expect(claimed('cluster-mass')).toEqual(new Set([0]));
    for (const id of [
      'step-down-maximum',
      'cluster-size',
      'threshold-free-enhancement',
      'benjamini-hochberg',
    ] as const) {
      expect(claimed(id)).toContain(0);
    }
  });

  test('is drawn again by another seed, with another digest', async () => {
    const other = {
      ...run,
      plan: { ...run.plan, test: { ...run.plan.test, seed: 'another' } },
    };
    expect(new Uint8Array(drawAll(other))).not.toEqual(new Uint8Array(drawAll(run)));
    expect((await outcomeOf(other)).digest).not.toBe(expected.digest);
  });

  test('is concluded again from what a server is sent', () => {
    const { z, upper, lower, maxStatistic, maxClusterMass, ...rest } = mapsOf(run);
    const { observedA, observedB, lagA, lagB, nullSd, parts } = rest;
    const sent = { z, upper, lower, maxStatistic, maxClusterMass, parts };
    const again = concludeFrom(run.plan, run.axes, {
      ...structuredClone(sent),
      ...{ observedA, observedB, lagA, lagB, nullSd },
    });
    const { digest, ...claims } = expected;
    expect(digest).toMatch(/^[0-9a-f]{64}$/);
    expect(again).toEqual(claims);
  });

  test('has edges and clusters that survive JSON', () => {
    const lists = { clusters: expected.clusters, edges: expected.corrections.map((c) => c.edges) };
    expect(JSON.parse(JSON.stringify(lists))).toEqual(lists);
  });
});

describe('the digest', () => {
  test('changes with any count and with nothing else of the maps', async () => {
    const run = planted('labels');
    const maps = mapsOf(run);
    const digest = async (change: Partial<typeof maps>) =>
      (await conclude(run.plan, run.axes, run.counts, { ...maps, ...change })).digest;
    const first = await digest({});
    const upper = maps.upper.with(3, maps.upper[3] + 1);
    expect(await digest({ upper })).not.toBe(first);
    const at = maps.lower.findIndex((count) => count < permutations);
    const lower = maps.lower.with(at, maps.lower[at] + 1);
    expect(await digest({ lower })).not.toBe(first);
    expect(await digest({ maxStatistic: maps.maxStatistic.map((m) => m + 1) })).not.toBe(first);
    expect(await digest({ maxClusterMass: maps.maxClusterMass.map((m) => m + 9) })).not.toBe(first);
    expect(await digest({ z: maps.z.map((z) => z * (1 + 1e-7)) })).toBe(first);
    const counts = { ...run.counts, epochsA: run.counts.epochsA + 1 };
    expect((await conclude(run.plan, run.axes, counts, maps)).digest).not.toBe(first);
  });
});

describe('mergeBlocks', () => {
  const run = planted('labels');
  const phases = { buffer: run.phases, ...run.counts };
  const draws = { buffer: drawAll(run) };
  const block = (from: number, to: number) =>
    computePairs(run.plan, run.axes, { from, to }, phases, draws);
  const merge = (blocks: PairBlock[]) => () => mergeBlocks(blocks, run.axes, run.plan.test);

  test('refuses gaps, overlaps, missing pairs and blocks of another shape', () => {
    expect(merge([block(0, 2), block(3, 6)])).toThrow('begins at pair 3 where pair 2 is next');
    expect(merge([block(0, 3), block(2, 6)])).toThrow('begins at pair 2 where pair 3 is next');
    expect(merge([block(0, 5)])).toThrow('5 of 6 pairs are there');
    expect(merge([{ ...block(0, 6), z: new Float32Array(3) }])).toThrow('z of the block at pair 0');
    expect(() =>
      mergeBlocks([block(0, 6)], run.axes, { ...run.plan.test, permutations: permutations - 1 }),
    ).toThrow('maxStatistic');
  });
});

describe('concludeFrom', () => {
  const run = planted('labels');
  const maps = mapsOf(run);
  const conclusion = (change: Partial<typeof maps>) => () =>
    concludeFrom(run.plan, run.axes, { ...maps, ...change });

  test('refuses maps that the plan cannot have made, naming map, place and value', () => {
    expect(conclusion({ z: maps.z.subarray(1) })).toThrow('z: 47 values where the plan makes 48');
    expect(conclusion({ z: maps.z.with(5, Number.NaN) })).toThrow('z: NaN at 5 is out of range');
    expect(conclusion({ observedA: maps.observedA.with(1, 1.01) })).toThrow('observedA: 1.0');
    expect(conclusion({ upper: maps.upper.with(2, 400) })).toThrow('upper: 400 at 2');
    expect(conclusion({ upper: maps.upper.map(() => 0) })).toThrow('leave out some of 399');
    expect(conclusion({ nullSd: maps.nullSd.with(0, -1) })).toThrow('nullSd: -1 at 0');
    expect(conclusion({ lagA: maps.lagA.with(0, 4) })).toThrow('lagA: 4 at 0');
    expect(conclusion({ maxStatistic: maps.maxStatistic.subarray(1) })).toThrow(
      'maxStatistic: 398',
    );
    expect(conclusion({ maxClusterMass: maps.maxClusterMass.with(0, -1) })).toThrow(RangeError);
  });

  test('counts features without spread', () => {
    const flat = mapsOf(tinyRun(() => 0));
    const { plan, axes } = tinyRun(() => 0);
    expect(concludeFrom(plan, axes, flat).degenerateFeatures).toBe(24);
    expect(concludeFrom(run.plan, run.axes, maps).degenerateFeatures).toBe(0);
  });
});
