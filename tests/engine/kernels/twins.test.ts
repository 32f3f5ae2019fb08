import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { newKernels, type Kernels } from '../../../workers/kernels';
import { clusterScratchLength } from '../../../workers/kernels/cluster-masses';
import { paddedFeatures } from '../../../workers/kernels/group';
import type { NullMapShape } from '../../../workers/kernels/group-maps';
import {
  labelLaneTableLength,
  labelOffsetCount,
  labelOffsets,
} from '../../../workers/kernels/label-lanes';
import { labelBlockCount } from '../../../workers/kernels/label-sums';

/**
 * Each compiled kernel against its plain twin, on random shapes. They round alike, so their numbers
 * must be the same to the last bit, but for cluster masses, which are summed in another order.
 */
const twins = { compiled: newKernels('compiled'), plain: newKernels('plain') };

/** Runs the same work with both and gives back what each made. */
function both<T>(work: (kernels: Kernels) => T): { compiled: T; plain: T } {
  return { compiled: work(twins.compiled), plain: work(twins.plain) };
}

/** A cheap seeded stream in -1 .. 1. */
function stream(seed: number): () => number {
  let state = seed >>> 0 || 1;
  return () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 31 - 1;
  };
}

function fill(array: Float32Array | Float64Array, next: () => number): void {
  for (let i = 0; i < array.length; i++) array[i] = next();
}

const seed = fc.nat(2 ** 31);
const epochs = fc.integer({ min: 2, max: 70 });
const rows = fc.integer({ min: 1, max: 40 });

test('the compiled kernels run here', () => {
  expect(twins.compiled.kind).toBe('compiled');
});

describe('compiled kernels make the same bits as their plain twins', () => {
  test('crossLanes, siteLanes and sumLanes, for any number of features in the last group', () => {
    fc.assert(
      fc.property(
        seed,
        epochs,
        fc.integer({ min: 1, max: 21 }),
        (from, epochCount, samplesPerEpoch) => {
          const made = both((kernels) => {
            const a = kernels.arrays({
              j: ['f32', epochCount * 2 * samplesPerEpoch],
              k: ['f32', epochCount * 2 * samplesPerEpoch],
              terms: ['f32', epochCount * 16],
              sums: ['f64', 16],
            });
            const next = stream(from);
            fill(a.j, next);
            fill(a.k, next);
            const seen: number[] = [];
            for (let first = 0; first < samplesPerEpoch; first += 8) {
              const count = Math.min(8, samplesPerEpoch - first);
              kernels.crossLanes(a.j, a.k, a.terms, { epochCount, samplesPerEpoch, first, count });
              kernels.sumLanes(a.terms, a.sums, { from: 1, to: epochCount });
              seen.push(...a.terms, ...a.sums);
              kernels.siteLanes(a.j, a.terms, { epochCount, samplesPerEpoch, first, count });
              seen.push(...a.terms);
            }
            return seen;
          });
          expect(made.compiled).toEqual(made.plain);
        },
      ),
    );
  });

  test('sumLabelledLanes, for any number of blocks in the last chunk', () => {
    fc.assert(
      fc.property(seed, epochs, rows, (from, epochCount, rowCount) => {
        const made = both((kernels) => {
          const a = kernels.arrays({
            terms: ['f32', epochCount * 16],
            offsets: ['u16', labelOffsetCount(epochCount, rowCount)],
            table: ['f32', labelLaneTableLength],
            sums: ['f32', rowCount * 16],
          });
          const next = stream(from);
          fill(a.terms, next);
          const masks = randomMasks(next, epochCount, rowCount);
          labelOffsets(masks, a.offsets, epochCount, { from: 0, to: rowCount });
          kernels.sumLabelledLanes(a.terms, a.offsets, a.table, a.sums, {
            epochCount,
            rows: rowCount,
          });
          return { sums: [...a.sums], terms: [...a.terms], masks };
        });
        expect(made.compiled.sums).toEqual(made.plain.sums);
        const exact = labelledSums(made.plain.terms, made.plain.masks, epochCount, rowCount);
        for (const [i, sum] of made.compiled.sums.entries()) {
          expect(Math.abs(sum - exact[i])).toBeLessThan(1e-7 * epochCount);
        }
      }),
    );
  });

  test('sumShuffledLanes', () => {
    fc.assert(
      fc.property(seed, epochs, rows, (from, epochCount, rowCount) => {
        const made = both((kernels) => {
          const a = kernels.arrays({
            j: ['f32', epochCount * 16],
            k: ['f32', epochCount * 16],
            order: ['u16', epochCount * rowCount],
            sums: ['f32', rowCount * 16],
          });
          const next = stream(from);
          fill(a.j, next);
          fill(a.k, next);
          for (let i = 0; i < a.order.length; i++) {
            a.order[i] = Math.floor(((next() + 1) / 2) * epochCount);
          }
          kernels.sumShuffledLanes(a.j, a.k, a.order, a.sums, { rows: rowCount, epochCount });
          return [...a.sums];
        });
        expect(made.compiled).toEqual(made.plain);
      }),
    );
  });

  test('resultantDifferences and resultantsOfLanes, never above 1', () => {
    fc.assert(
      fc.property(seed, rows, epochs, epochs, (from, rowCount, epochsA, epochsB) => {
        const made = both((kernels) => {
          const a = kernels.arrays({
            sums: ['f32', rowCount * 16],
            total: ['f32', 16],
            values: ['f32', rowCount * 8],
            lengths: ['f32', rowCount * 8],
          });
          const next = stream(from);
          fill(a.sums, () => next() * epochsA);
          fill(a.total, () => next() * (epochsA + epochsB));
          const shape = { rows: rowCount, epochsA, epochsB };
          kernels.resultantDifferences(a.sums, a.total, a.values, shape);
          kernels.resultantsOfLanes(a.sums, a.lengths, { rows: rowCount, epochs: epochsA });
          return [...a.values, ...a.lengths];
        });
        expect(made.compiled).toEqual(made.plain);
        expect(made.compiled.every((value) => Math.abs(value) <= 1)).toBe(true);
      }),
    );
  });

  test('addGroupMoments and standardisedDifferences, over several tiles', () => {
    fc.assert(
      fc.property(seed, rows, rows, (from, firstRows, secondRows) => {
        const made = both((kernels) => {
          const most = Math.max(firstRows, secondRows);
          const a = kernels.arrays({
            values: ['f32', most * 8],
            other: ['f32', most * 8],
            origin: ['f64', 8],
            sum: ['f64', 8],
            squares: ['f64', 8],
            upperFrom: ['f32', 8],
            lowerTo: ['f32', 8],
            upper: ['u32', 8],
            lower: ['u32', 8],
            mean: ['f64', 8],
            inverse: ['f64', 8],
          });
          const next = stream(from);
          fill(a.upperFrom, next);
          fill(a.lowerTo, next);
          fill(a.mean, next);
          fill(a.inverse, next);
          for (const [i, count] of [firstRows, secondRows].entries()) {
            fill(a.values, next);
            fill(a.other, next);
            kernels.addGroupMoments(a.values, a, count, i === 0);
          }
          kernels.standardisedDifferences(a.values, a.other, a, a, secondRows);
          return Object.values(a).map((array) => [...array]);
        });
        expect(made.compiled).toEqual(made.plain);
      }),
    );
  });
});

describe('null maps and their clusters', () => {
  const shapeOf = fc.record({
    frequencyCount: fc.integer({ min: 1, max: 7 }),
    timeCount: fc.integer({ min: 1, max: 150 }),
    tailSign: fc.constantFrom<(-1 | 0 | 1)[]>(-1, 0, 1),
    clusterFormingZ: fc.constantFrom(0.01, 0.3, 0.9),
  });

  test('are the same bit by bit, and masses to the last bit of f32', () => {
    fc.assert(
      fc.property(seed, rows, shapeOf, (from, rowCount, map) => {
        const made = both((kernels) => nullMaps(kernels, stream(from), rowCount, map));
        const { masses, ...rest } = made.compiled;
        const { masses: plainMasses, ...plainRest } = made.plain;
        expect(rest).toEqual(plainRest);
        for (const [i, mass] of masses.entries()) {
          expect(Math.abs(mass - plainMasses[i])).toBeLessThanOrEqual(2e-7 * plainMasses[i]);
        }
      }),
      { numRuns: 200 },
    );
  });
});

function nullMaps(
  kernels: Kernels,
  next: () => number,
  rowCount: number,
  map: {
    frequencyCount: number;
    timeCount: number;
    tailSign: -1 | 0 | 1;
    clusterFormingZ: number;
  },
) {
  const featureCount = map.frequencyCount * map.timeCount;
  const stride = paddedFeatures(featureCount);
  const shape: NullMapShape = {
    stride,
    bitStride: Math.ceil(stride / 64) * 8,
    clusterFormingZ: map.clusterFormingZ,
    tailSign: map.tailSign,
    binCount: 5,
    binsPerUnit: 2,
    binOffset: 2,
    permutations: rowCount,
  };
  const a = kernels.arrays({
    values: ['f32', rowCount * 8],
    center: ['f32', 8],
    inverse: ['f32', 8],
    rest: ['f32', 8],
    beyond: ['f32', rowCount * stride],
    z: ['f32', rowCount * stride],
    counts: ['u32', rowCount * 2],
    positive: ['u8', rowCount * shape.bitStride],
    negative: ['u8', rowCount * shape.bitStride],
    best: ['f32', rowCount * 4],
    histogram: ['u16', stride * shape.binCount],
    masses: ['f32', rowCount],
    scratch: ['f64', clusterScratchLength(map.frequencyCount, map.timeCount)],
  });
  a.best.fill(-Infinity);
  for (let first = 0; first < featureCount; first += 8) {
    fill(a.values, next);
    fill(a.center, () => next() * 0.1);
    fill(a.rest, () => next() * 1e-6);
    fill(a.inverse, next);
    const out = {
      beyond: a.beyond,
      counts: a.counts,
      positive: a.positive.subarray(first / 8),
      negative: a.negative.subarray(first / 8),
      best: a.best,
    };
    const histogram = a.histogram.subarray(first * shape.binCount);
    const features = Math.min(8, featureCount - first);
    kernels.standardiseGroup(a.values, a, a.z.subarray(first * rowCount), rowCount);
    kernels.addGroupMaps(a.values, a, out, histogram, { rows: rowCount, features, shape });
  }
  kernels.addClusterMasses(a, a.masses, a.scratch, {
    rows: rowCount,
    frequencyCount: map.frequencyCount,
    timeCount: map.timeCount,
    shape,
  });
  return {
    beyond: [...a.beyond],
    z: [...a.z],
    counts: [...a.counts],
    positive: [...a.positive],
    negative: [...a.negative],
    best: [...a.best],
    histogram: [...a.histogram],
    masses: [...a.masses],
  };
}

function randomMasks(next: () => number, epochCount: number, rowCount: number): Uint8Array {
  const blocks = labelBlockCount(epochCount);
  const masks = new Uint8Array(blocks * rowCount);
  for (let row = 0; row < rowCount; row++) {
    for (let n = 0; n < epochCount; n++) {
      if (next() > 0) masks[row * blocks + Math.floor(n / 7)] |= 1 << (n % 7);
    }
  }
  return masks;
}

/** Sums by the definition, in f64. */
function labelledSums(
  terms: number[],
  masks: Uint8Array,
  epochCount: number,
  rowCount: number,
): Float64Array {
  const blocks = labelBlockCount(epochCount);
  const sums = new Float64Array(rowCount * 16);
  for (let row = 0; row < rowCount; row++) {
    for (let n = 0; n < epochCount; n++) {
      if (!((masks[row * blocks + Math.floor(n / 7)] >> (n % 7)) & 1)) continue;
      for (let lane = 0; lane < 16; lane++) sums[row * 16 + lane] += terms[n * 16 + lane];
    }
  }
  return sums;
}
