import type { Arrays, ArrayPlan, Kernels } from '../../kernels/kernels';
import type { Measure } from '../measure/measure';
import type { SettingField, Settings } from '../settings';
import type { Epoch } from '../types';
import type { PhaseLayout } from '../phase/layout';

/** Sizes that a null's draws depend on. */
export interface DrawShape {
  permutations: number;
  siteCount: number;
  epochsA: number;
  epochsB: number;
  /** Samples of an epoch's window, both ends included. */
  windowSamples: number;
  /** Block of each kept epoch, for nulls that keep to blocks. */
  blocks?: number[] | undefined;
}

/** Permutations `from .. to - 1`. */
export interface PermutationRange {
  from: number;
  to: number;
}

/** What a run's surrogates are made of; the same for every pair. */
export interface RunInput {
  measure: Measure;
  phasors: Float32Array;
  layout: PhaseLayout;
  shape: DrawShape;
  draws: ArrayBufferLike;
  /** frequency x time points of a pair. */
  featureCount: number;
}

/**
 * Makes the surrogates of pairs, one pair after the other. It owns its scratch: not re-entrant.
 */
export interface PairSampler {
  /**
   * Writes surrogates of sites j and k, `[permutation - range.from][feature]`, f64 sums rounded
   * once when stored. A null whose `statistic` is 'difference' writes measure(A) - measure(B) to
   * `first`; one whose `statistic` is 'z-difference' writes measure(A) to `first` and measure(B)
   * to `second`.
   */
  surrogates(
    j: number,
    k: number,
    range: PermutationRange,
    first: Float32Array,
    second: Float32Array,
  ): void;
}

/**
 * The pair that is worked on. Its sites' phasors lie where kernels reach them, laid out as
 * phase/layout.ts says of one site; empty where the run's kernels do not read phasors.
 */
export interface HeldPair {
  j: number;
  k: number;
  phasorsJ: Float32Array;
  phasorsK: Float32Array;
}

/**
 * Makes surrogates for eight neighbouring features at a time, the group that kernels work on.
 * It owns its arrays: not re-entrant.
 */
export interface GroupSampler {
  begin(pair: HeldPair): void;
  /**
   * Writes surrogates of features `8 * group ..`, `[permutation - range.from][8]`, as `PairSampler`
   * says of `first` and `second`. Beyond the last feature a group repeats it. Ranges are those that
   * `GroupSource` was told of.
   */
  fill(group: number, range: PermutationRange, first: Float32Array, second: Float32Array): void;
}

/** A group sampler to be: it says which arrays it needs, and is made once they are there. */
export interface GroupSource {
  /** For ranges of at most `rows` permutations. */
  arrays(rows: number): ArrayPlan;
  sampler(kernels: Kernels, arrays: Arrays<ArrayPlan>): GroupSampler;
}

/**
 * A null model: what is shuffled, how it is drawn, and what it makes of a pair. Permutation p is
 * drawn from its own generator, so any range may be drawn by anyone, in any order.
 * Adding one is a file and a line in null/registry.ts.
 */
export interface NullModel<Id extends string = string> {
  id: Id;
  name: string;
  /** One sentence: what is shuffled. */
  shuffles: string;
  /** One sentence: what holds if the null is true. */
  underNull: string;
  source: string;
  /** What the plan must say besides its id; absent where nothing. */
  settings?: readonly SettingField[];
  /** The block of each kept epoch, from 0 up, for nulls that keep to blocks. */
  blocksOf?(epochs: Pick<Epoch, 'recording' | 'onsetS'>[], settings: Settings): number[];
  /** Whether phases are needed at every sample of the window, not at the plan's times only. */
  needsWholeWindow: boolean;
  /**
   * The statistic of a feature: the difference of the measure, or the difference of each
   * condition's z against its own surrogates (numerics, section 5).
   */
  statistic: 'difference' | 'z-difference';
  /** The statistic in words, for axes and tables. */
  statisticName: string;
  /** Whether it holds only if the epochs of A and B could have changed places in time. */
  exchangesLabels: boolean;
  /** The longest window that can be drawn for, samples. */
  mostWindowSamples: number;
  /** ln of the number of different outcomes of a draw: fewer than permutations bound p. */
  logArrangements(shape: DrawShape): number;
  /** Whether every outcome has a twin of opposite sign, so that two-sided extremes come in pairs. */
  hasTwins(shape: DrawShape): boolean;
  drawsByteLength(shape: DrawShape): number;
  /** Writes the draws of a range of permutations; touches no other bytes. */
  draw(seed: string, range: PermutationRange, draws: ArrayBufferLike, shape: DrawShape): void;
  /** The definition in f64: what a faster way is held against, and what runs where there is none. */
  sampler(run: RunInput): PairSampler;
  /**
   * A faster way by the kernels, for measures that are resultant lengths. It needs the phasors at
   * the plan's times only.
   */
  groups?(run: RunInput): GroupSource;
}
