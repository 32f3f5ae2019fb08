import { describe, expect, test } from 'vitest';
import { epochBlocks, planSchema } from '../../../workers/engine';
import { labelsWithinBlocks } from '../../../workers/engine/null/labels-within-blocks';
import { samplePlan } from '../sample-plan';

const epochs = [
  { recording: 'one', onsetS: 10 },
  { recording: 'two', onsetS: 5 },
  { recording: 'one', onsetS: 130 },
  { recording: 'one', onsetS: 20 },
];

const blocks = (by: string, size = 2) =>
  epochBlocks(samplePlan({ null: 'labels-within-blocks', nullSettings: { by, size } }), epochs);

describe('blocks of epochs', () => {
  test('are recordings, runs of epochs in time, or stretches of the recording’s clock', () => {
    expect(blocks('recording')).toEqual([0, 1, 0, 0]);
    expect(blocks('epochs')).toEqual([0, 2, 1, 0]);
    expect(blocks('minutes')).toEqual([0, 2, 1, 0]);
    expect(blocks('minutes', 3)).toEqual([0, 1, 0, 0]);
    expect(epochBlocks(samplePlan(), epochs)).toBeUndefined();
  });
});

describe('labels within blocks', () => {
  const shape = {
    ...{ permutations: 3000, siteCount: 2, epochsA: 3, epochsB: 4, windowSamples: 1 },
    blocks: [0, 0, 1, 0, 0, 1, 1],
  };
  const draws = new ArrayBuffer(labelsWithinBlocks.drawsByteLength(shape));
  labelsWithinBlocks.draw('seed', { from: 0, to: 3000 }, draws, shape);
  const masks = new Uint8Array(draws);

  test('keep each block’s count of A, and draw all of its arrangements equally often', () => {
    const counts = new Map<number, number>();
    for (const mask of masks) {
      const a = (list: number[]) => list.filter((n) => (mask >> n) & 1).length;
      expect(a([0, 1, 3, 4])).toBe(2);
      expect(a([2, 5, 6])).toBe(1);
      counts.set(mask, (counts.get(mask) ?? 0) + 1);
    }
    // choose(4, 2) * choose(3, 1) = 18 arrangements; scipy.stats.chi2.isf(1e-5, 17) = 53.27.
    expect(counts.size).toBe(18);
    expect(Math.exp(labelsWithinBlocks.logArrangements(shape))).toBeCloseTo(18, 9);
    const expected = 3000 / 18;
    const chi = [...counts.values()].reduce((sum, n) => sum + (n - expected) ** 2 / expected, 0);
    expect(chi).toBeLessThan(53.27);
  });

  test('refuse to be drawn without the blocks', () => {
    const bare = { ...shape, blocks: undefined };
    expect(() => labelsWithinBlocks.draw('s', { from: 0, to: 1 }, draws, bare)).toThrow(
      '0 epochs have a block where the plan keeps 7',
    );
  });
});

describe('a plan’s settings', () => {
  const issues = (change: Parameters<typeof samplePlan>[0]) =>
    planSchema.safeParse(samplePlan(change)).error?.issues.map(({ path }) => path.join('.')) ?? [];

  test('are those that its null asks for, no more and no fewer', () => {
    const nullSettings = { by: 'recording', size: 20 };
    expect(issues({ null: 'labels-within-blocks', nullSettings })).toEqual([]);
    expect(issues({ null: 'labels', nullSettings })).toEqual(['nullSettings']);
    expect(issues({ null: 'labels-within-blocks' })).toEqual([
      'nullSettings.by',
      'nullSettings.size',
    ]);
    const wrong = { by: 'moon', size: 1 };
    expect(issues({ null: 'labels-within-blocks', nullSettings: wrong })).toEqual([
      'nullSettings.by',
      'nullSettings.size',
    ]);
  });
});
