import { clusterScratchLength } from '../../kernels/cluster-masses';
import { groupCount, groupFeatures, paddedFeatures } from '../../kernels/group';
import type { NullMapShape } from '../../kernels/group-maps';
import { leastFloatFrom, mostFloatTo } from '../../kernels/group-moments';
import type { ArrayPlan, Arrays, Kernels } from '../../kernels/kernels';
import { ties } from '../ties';
import { finishState, groupStates, sharedScale, statePlan, type GroupState } from './group-state';
import type { NullModel, PermutationRange, RunInput } from './model';
import { rowGroups } from './row-groups';

/** Null maps that are held at once, 64 MB of f32; a null of more is gone through in tiles. */
const tileValues = 2 ** 24;

/** What the null maps are made with. */
export interface NullSettings extends Pick<
  NullMapShape,
  'tailSign' | 'clusterFormingZ' | 'binCount' | 'binsPerUnit' | 'binOffset'
> {
  frequencyCount: number;
  timeCount: number;
  /** Map values held at once; nothing that is computed depends on it. */
  tileValues?: number;
}

/** A pair's null, worked out; arrays of the next pair overwrite it. */
export interface PairNull {
  /**
   * Works a pair out from its observed measures (f64). Afterwards `observed`, `groups` and
   * `histogram` hold this pair's numbers, `best` and `masses` the largest of all pairs so far.
   */
  add(j: number, k: number, valueA: Float64Array, valueB: Float64Array): void;
  /** The observed statistic of each feature, rounded to f32 as surrogates are. */
  observed: Float64Array;
  /** Moments and counts of features 8 g .. 8 g + 7. */
  groups: GroupState[];
  /** `histogram[feature * binCount + bin]`. */
  histogram: Uint16Array;
  /** `best[permutation * 4 + lane]` and `masses[permutation]`: see the kernels. */
  best: Float32Array;
  masses: Float32Array;
}

/**
 * The null of pairs' statistics: the difference of the measure, or the difference of each
 * condition's z against its own surrogates (numerics, section 5). Eight features go through all
 * steps while they are in cache. Where the maps of all permutations do not fit a tile, surrogates
 * are made again for each step: memory grows neither with pairs nor, beyond a tile, permutations.
 */
export function pairNull(
  model: NullModel,
  run: RunInput,
  kernels: Kernels,
  settings: NullSettings,
): PairNull {
  const { permutations } = run.shape;
  const { timeCount, frequencyCount } = settings;
  const stride = paddedFeatures(run.featureCount);
  const limit = Math.floor((settings.tileValues ?? tileValues) / stride);
  const rows = Math.max(1, Math.min(permutations, limit));
  const tiles = tilesOf(permutations, rows);
  const shape: NullMapShape = { ...settings, stride, bitStride: Math.ceil(stride / 64) * 8 };
  const source = model.groups?.(run) ?? rowGroups(model, run);
  const plan = arrayPlan(model, run, rows, shape, settings);
  const arrays = kernels.arrays({ ...source.arrays(rows), ...plan } as ArrayPlan) as Arrays<
    typeof plan
  >;
  const sampler = source.sampler(kernels, arrays);
  const count = groupCount(run.featureCount);
  const own = groupStates(arrays, 0, count);
  const isDifference = model.statistic === 'difference';
  const ofA = isDifference ? [] : groupStates(arrays, count, count);
  const ofB = isDifference ? [] : groupStates(arrays, 2 * count, count);
  const observed = new Float64Array(stride);
  const rowViews = Array.from({ length: count }, (_, group) => mapViews(arrays, group, shape));
  let measured: { a: Float64Array; b: Float64Array } = { a: observed, b: observed };
  arrays.best.fill(-Infinity);

  function fill(group: number, range: PermutationRange) {
    sampler.fill(group, range, arrays.first, arrays.second);
  }

  function conditionSums(group: number, range: PermutationRange) {
    const [size, start] = [range.to - range.from, range.from === 0];
    kernels.addGroupMoments(arrays.first, ofA[group], size, start);
    kernels.addGroupMoments(arrays.second, ofB[group], size, start);
  }

  function conditionScales(group: number) {
    finishState(ofA[group], permutations);
    finishState(ofB[group], permutations);
    sharedScale(ofA[group], ofB[group]);
  }

  /** From what the sampler wrote to the statistic, in `first`. */
  function combine(group: number, range: PermutationRange) {
    if (isDifference) return;
    const size = range.to - range.from;
    kernels.standardisedDifferences(arrays.first, arrays.second, ofA[group], ofB[group], size);
  }

  function observe(group: number) {
    const tolerance = isDifference ? ties.measure : ties.z;
    const state = own[group];
    for (let x = 0; x < groupFeatures; x++) {
      const feature = Math.min(group * groupFeatures + x, run.featureCount - 1);
      const [a, b] = [measured.a[feature], measured.b[feature]];
      const value = isDifference ? a - b : zDifference(a, b, ofA[group], ofB[group], x);
      const rounded = Math.fround(value);
      observed[group * groupFeatures + x] = rounded;
      state.upperFrom[x] = leastFloatFrom(rounded - tolerance);
      state.lowerTo[x] = mostFloatTo(rounded + tolerance);
    }
  }

  function sums(group: number, range: PermutationRange) {
    const size = range.to - range.from;
    kernels.addGroupMoments(arrays.first, own[group], size, range.from === 0);
  }

  function maps(group: number, range: PermutationRange) {
    const { at, histogram } = rowViews[group];
    const features = Math.min(groupFeatures, run.featureCount - group * groupFeatures);
    const best = arrays.best.subarray(range.from * 4);
    const part = { rows: range.to - range.from, features, shape };
    kernels.addGroupMaps(arrays.first, own[group], { ...at, best }, histogram, part);
  }

  function clusters(range: PermutationRange) {
    const map = { rows: range.to - range.from, frequencyCount, timeCount, shape };
    const masses = arrays.masses.subarray(range.from);
    kernels.addClusterMasses(arrays, masses, arrays.scratch, map);
  }

  function each(work: (group: number, range: PermutationRange) => void, range: PermutationRange) {
    for (let group = 0; group < count; group++) work(group, range);
  }

  /** All steps of a group one after the other, on surrogates that are made once. */
  function wholeGroup(group: number, range: PermutationRange) {
    fill(group, range);
    if (!isDifference) {
      conditionSums(group, range);
      conditionScales(group);
    }
    combine(group, range);
    observe(group);
    sums(group, range);
    finishState(own[group], permutations);
    maps(group, range);
  }

  /** The same in steps, each over all tiles. */
  function inTiles() {
    if (!isDifference) {
      for (const range of tiles) {
        each((group) => {
          fill(group, range);
          conditionSums(group, range);
        }, range);
      }
      each(conditionScales, tiles[0]);
    }
    each(observe, tiles[0]);
    for (const range of tiles) {
      each((group) => {
        fill(group, range);
        combine(group, range);
        sums(group, range);
      }, range);
    }
    for (const state of own) finishState(state, permutations);
    for (const range of tiles) {
      each((group) => {
        fill(group, range);
        combine(group, range);
        maps(group, range);
      }, range);
      clusters(range);
    }
  }

  return {
    observed,
    groups: own,
    histogram: arrays.histogram,
    best: arrays.best,
    masses: arrays.masses,
    add(j, k, valueA, valueB) {
      measured = { a: valueA, b: valueB };
      arrays.histogram.fill(0);
      sampler.begin(j, k);
      if (tiles.length > 1) {
        inTiles();
      } else {
        each(wholeGroup, tiles[0]);
        clusters(tiles[0]);
      }
    },
  };
}

function tilesOf(permutations: number, rows: number): PermutationRange[] {
  return Array.from({ length: Math.ceil(permutations / rows) }, (_, i) => ({
    from: i * rows,
    to: Math.min(permutations, (i + 1) * rows),
  }));
}

function arrayPlan(
  model: NullModel,
  run: RunInput,
  rows: number,
  shape: NullMapShape,
  { frequencyCount, timeCount }: NullSettings,
) {
  const isDifference = model.statistic === 'difference';
  return {
    ...statePlan(groupCount(run.featureCount) * (isDifference ? 1 : 3)),
    first: ['f32', rows * groupFeatures],
    second: ['f32', isDifference ? 0 : rows * groupFeatures],
    z: ['f32', rows * shape.stride],
    positive: ['u8', rows * shape.bitStride],
    negative: ['u8', rows * shape.bitStride],
    histogram: ['u16', shape.stride * shape.binCount],
    best: ['f32', run.shape.permutations * 4],
    masses: ['f32', run.shape.permutations],
    scratch: ['f64', clusterScratchLength(frequencyCount, timeCount)],
  } as const;
}

/** Where a group's part of the map rows begins. */
function mapViews(
  arrays: Arrays<ReturnType<typeof arrayPlan>>,
  group: number,
  { binCount }: NullMapShape,
) {
  const feature = group * groupFeatures;
  return {
    at: {
      z: arrays.z.subarray(feature),
      positive: arrays.positive.subarray(group),
      negative: arrays.negative.subarray(group),
    },
    histogram: arrays.histogram.subarray(feature * binCount),
  };
}

function zDifference(a: number, b: number, ofA: GroupState, ofB: GroupState, x: number): number {
  const zA = (Math.fround(a) - ofA.mean[x]) * ofA.inverse[x];
  const zB = (Math.fround(b) - ofB.mean[x]) * ofB.inverse[x];
  return zA - zB;
}
