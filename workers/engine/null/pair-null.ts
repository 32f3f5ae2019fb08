import { clusterScratchLength } from '../../kernels/cluster-masses';
import { groupCount, groupFeatures, paddedFeatures } from '../../kernels/group';
import { standardised, type NullMapShape } from '../../kernels/group-maps';
import { leastFloatFrom, mostFloatTo } from '../../kernels/group-moments';
import type { ArrayPlan, Arrays, Kernels } from '../../kernels/kernels';
import { MeasureObserver, newObserved, type Observed, type Observer } from '../observe';
import { LaneObserver, observerArrays } from '../observe-lanes';
import { ties } from '../ties';
import { finishState, groupStates, sharedScale, statePlan, type GroupState } from './group-state';
import type { GroupSampler, NullModel, PermutationRange, RunInput } from './model';
import { rowGroups } from './row-groups';
import { SiteSlots } from './site-slots';

/** Null maps that are held at once, 64 MB of f32; a null of more is gone through in tiles. */
const mostTileValues = 2 ** 24;

/** What the null maps are made with. */
export interface NullSettings extends Pick<
  NullMapShape,
  'tailSign' | 'clusterFormingZ' | 'binCount' | 'binsPerUnit' | 'binOffset'
> {
  frequencyCount: number;
  timeCount: number;
  /** Map values held at once; nothing that is computed depends on it. */
  tileValues?: number;
  /**
   * Visits a pair's null maps, a range of permutations at a time and in order:
   * `z[(group * rows + row) * 8 + feature of the group]`. The pair's observed statistic, moments and counts are final by then.
   */
  onMaps?: (range: PermutationRange, z: Float32Array) => void;
}

/**
 * The null of pairs' statistics: the difference of the measure, or the difference of each
 * condition's z against its own surrogates (numerics, section 5). Eight features go through all
 * steps while they are in cache. Where the maps of all permutations do not fit a tile, surrogates
 * are made again for each step: memory grows neither with pairs nor, beyond a tile, permutations.
 */
export class PairNull {
  /** Observed measures of the pair that was added last. */
  readonly a: Observed;
  readonly b: Observed;
  /** Its observed statistic, by feature, rounded to f32 as surrogates are. */
  readonly observed: Float64Array;
  /** Its moments and counts, of features 8 g .. 8 g + 7 at g. */
  readonly groups: GroupState[];
  /** Largest statistic and cluster mass of all pairs so far: see `NullMapRows`, `masses[p]`. */
  readonly best: Float32Array;
  readonly masses: Float32Array;
  /** `histogram[feature * binCount + bin]` of the last pair. */
  readonly histogram: Uint16Array;

  private readonly isDifference: boolean;
  private readonly shape: NullMapShape;
  private readonly tiles: PermutationRange[];
  private readonly arrays: NullArrays;
  private readonly sampler: GroupSampler;
  private readonly observer: Observer;
  private readonly slots: SiteSlots | null;
  /** Nulls of each condition by itself, for differences of z. */
  private readonly ofA: GroupState[];
  private readonly ofB: GroupState[];

  constructor(
    model: NullModel,
    private readonly run: RunInput,
    private readonly kernels: Kernels,
    private readonly settings: NullSettings,
  ) {
    const { permutations } = run.shape;
    const count = groupCount(run.featureCount);
    const stride = paddedFeatures(run.featureCount);
    this.isDifference = model.statistic === 'difference';
    this.shape = { ...settings, stride, bitStride: Math.ceil(stride / 64) * 8, permutations };
    const most = Math.floor((settings.tileValues ?? mostTileValues) / stride);
    const rows = Math.max(1, Math.min(permutations, most));
    this.tiles = tilesOf(permutations, rows);
    const byLanes = run.measure.isResultantLength && !model.needsWholeWindow;
    const source = (byLanes && model.groups?.(run)) || rowGroups(model, run);
    const plan = nullArrays(run, rows, this.shape, settings, this.isDifference);
    const lanes = byLanes ? { ...SiteSlots.plan(run), ...observerArrays(run) } : {};
    const all = kernels.arrays<ArrayPlan>({ ...source.arrays(rows), ...lanes, ...plan });
    const arrays = (this.arrays = all as NullArrays);
    this.sampler = source.sampler(kernels, all);
    this.slots = byLanes ? new SiteSlots(run, all as LaneArrays) : null;
    this.observer = byLanes
      ? new LaneObserver(run, kernels, all as LaneArrays)
      : new MeasureObserver(run);
    this.groups = groupStates(arrays, 0, count);
    this.ofA = this.isDifference ? [] : groupStates(arrays, count, count);
    this.ofB = this.isDifference ? [] : groupStates(arrays, 2 * count, count);
    this.a = newObserved(run.featureCount);
    this.b = newObserved(run.featureCount);
    this.observed = new Float64Array(stride);
    this.best = arrays.best.fill(-Infinity);
    this.masses = arrays.masses;
    this.histogram = arrays.histogram;
  }

  /** The observed z of a feature. */
  observedZ(feature: number): number {
    const state = this.groups[Math.floor(feature / groupFeatures)];
    return standardised(this.observed[feature], state.map, feature % groupFeatures);
  }

  /** Works a pair out: its own numbers are overwritten, maxima over pairs raised. */
  add(j: number, k: number): void {
    const none = this.arrays.first;
    const pair = this.slots?.hold(j, k) ?? { j, k, phasorsJ: none, phasorsK: none };
    this.histogram.fill(0);
    this.observer.observe(pair, this.a, this.b);
    this.sampler.begin(pair);
    if (this.tiles.length > 1) this.inTiles();
    else this.atOnce(this.tiles[0]);
  }

  /** All steps of a group one after the other, on surrogates that are made once. */
  private atOnce(range: PermutationRange): void {
    for (let group = 0; group < this.groups.length; group++) {
      this.fill(group, range);
      if (!this.isDifference) {
        this.addConditions(group, range);
        this.finishConditions(group);
        this.combine(group, range);
      }
      this.takeObserved(group);
      this.addSums(group, range);
      finishState(this.groups[group], this.run.shape.permutations);
      this.addMaps(group, range);
    }
    this.addClusters(range);
  }

  /** The same in steps, each over all tiles, on surrogates that are made for each step again. */
  private inTiles(): void {
    const groups = this.groups.map((_, group) => group);
    if (!this.isDifference) {
      this.eachTile((group, range) => this.addConditions(group, range), false);
      for (const group of groups) this.finishConditions(group);
    }
    for (const group of groups) this.takeObserved(group);
    this.eachTile((group, range) => this.addSums(group, range), true);
    for (const state of this.groups) finishState(state, this.run.shape.permutations);
    this.eachTile((group, range) => {
      this.addMaps(group, range);
      if (group === groups.length - 1) this.addClusters(range);
    }, true);
  }

  private eachTile(step: (group: number, range: PermutationRange) => void, combined: boolean) {
    for (const range of this.tiles) {
      for (let group = 0; group < this.groups.length; group++) {
        this.fill(group, range);
        if (combined && !this.isDifference) this.combine(group, range);
        step(group, range);
      }
    }
  }

  private fill(group: number, range: PermutationRange): void {
    this.sampler.fill(group, range, this.arrays.first, this.arrays.second);
  }

  private addConditions(group: number, { from, to }: PermutationRange): void {
    const { kernels, arrays } = this;
    kernels.addGroupMoments(arrays.first, this.ofA[group], to - from, from === 0);
    kernels.addGroupMoments(arrays.second, this.ofB[group], to - from, from === 0);
  }

  private finishConditions(group: number): void {
    finishState(this.ofA[group], this.run.shape.permutations);
    finishState(this.ofB[group], this.run.shape.permutations);
    sharedScale(this.ofA[group], this.ofB[group]);
  }

  /** From measures of A and B to the difference of z, in `first`. */
  private combine(group: number, { from, to }: PermutationRange): void {
    const { first, second } = this.arrays;
    const [a, b] = [this.ofA[group], this.ofB[group]];
    this.kernels.standardisedDifferences(first, second, a, b, to - from);
  }

  private takeObserved(group: number): void {
    const tolerance = this.isDifference ? ties.measure : ties.z;
    const { upperFrom, lowerTo } = this.groups[group];
    for (let x = 0; x < groupFeatures; x++) {
      const feature = Math.min(group * groupFeatures + x, this.run.featureCount - 1);
      const [a, b] = [this.a.value[feature], this.b.value[feature]];
      const value = this.isDifference
        ? a - b
        : zDifference(a, b, this.ofA[group], this.ofB[group], x);
      const rounded = Math.fround(value);
      this.observed[group * groupFeatures + x] = rounded;
      upperFrom[x] = leastFloatFrom(rounded - tolerance);
      lowerTo[x] = mostFloatTo(rounded + tolerance);
    }
  }

  private addSums(group: number, { from, to }: PermutationRange): void {
    this.kernels.addGroupMoments(this.arrays.first, this.groups[group], to - from, from === 0);
  }

  private addMaps(group: number, { from, to }: PermutationRange): void {
    const { arrays, shape } = this;
    const feature = group * groupFeatures;
    const rows = to - from;
    if (group === 0) arrays.marks.fill(0);
    const features = Math.min(groupFeatures, this.run.featureCount - feature);
    const out = {
      beyond: arrays.beyond,
      counts: arrays.marks,
      positive: arrays.positive.subarray(group),
      negative: arrays.negative.subarray(group),
      best: arrays.best.subarray(from * 4),
    };
    const histogram = arrays.histogram.subarray(feature * shape.binCount);
    const part = { rows, features, shape };
    if (this.settings.onMaps) {
      const z = arrays.z.subarray(feature * rows);
      this.kernels.standardiseGroup(arrays.first, this.groups[group].map, z, rows);
    }
    this.kernels.addGroupMaps(arrays.first, this.groups[group].map, out, histogram, part);
  }

  private addClusters({ from, to }: PermutationRange): void {
    const { arrays, shape } = this;
    const { frequencyCount, timeCount } = this.settings;
    const map = { rows: to - from, frequencyCount, timeCount, shape };
    this.kernels.addClusterMasses(arrays, arrays.masses.subarray(from), arrays.scratch, map);
    this.settings.onMaps?.({ from, to }, arrays.z);
  }
}

function tilesOf(permutations: number, rows: number): PermutationRange[] {
  return Array.from({ length: Math.ceil(permutations / rows) }, (_, i) => ({
    from: i * rows,
    to: Math.min(permutations, (i + 1) * rows),
  }));
}

type NullArrays = Arrays<ReturnType<typeof nullArrays>>;
type LaneArrays = Arrays<ReturnType<typeof SiteSlots.plan> & ReturnType<typeof observerArrays>>;

function nullArrays(
  run: RunInput,
  rows: number,
  shape: NullMapShape,
  { frequencyCount, timeCount, onMaps }: NullSettings,
  isDifference: boolean,
) {
  const stride = paddedFeatures(run.featureCount);
  return {
    ...statePlan(groupCount(run.featureCount) * (isDifference ? 1 : 3)),
    first: ['f32', rows * groupFeatures],
    second: ['f32', isDifference ? 0 : rows * groupFeatures],
    beyond: ['f32', rows * stride],
    z: ['f32', onMaps ? rows * stride : 0],
    marks: ['u32', rows * 2],
    positive: ['u8', rows * shape.bitStride],
    negative: ['u8', rows * shape.bitStride],
    histogram: ['u16', stride * shape.binCount],
    best: ['f32', run.shape.permutations * 4],
    masses: ['f32', run.shape.permutations],
    scratch: ['f64', clusterScratchLength(frequencyCount, timeCount)],
  } as const satisfies ArrayPlan;
}

/** z_A - z_B of the observed measures. */
function zDifference(a: number, b: number, ofA: GroupState, ofB: GroupState, x: number): number {
  const zA = (Math.fround(a) - ofA.mean[x]) * ofA.inverse[x];
  const zB = (Math.fround(b) - ofB.mean[x]) * ofB.inverse[x];
  return zA - zB;
}
