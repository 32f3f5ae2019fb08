import type { SettingField } from '../settings';
import type { ChanceLevels } from '../numbers/chance';

/** Which stretches of phasors are summed, epoch by epoch. */
export interface EpochRows {
  /** Epochs to sum: the first `epochCount` entries of both lists of starts. */
  epochCount: number;
  /** Neighbouring samples of a stretch: features. */
  sampleCount: number;
  /** From a real part to its imaginary part, elements; samplesPerEpoch of phase/layout.ts. */
  partDistance: number;
}

/** One epoch's whole window under many circular shifts, for nulls that keep every sample. */
export interface ShiftedWindow {
  frequencyCount: number;
  sampleCount: number;
  /** The plan's times as indices among the window's samples. */
  keptSamples: Int32Array;
  /** Shifts of permutation i, 0 .. sampleCount - 1: `shifts[jShift + i * shiftStride]`, k alike. */
  shifts: Uint16Array;
  jShift: number;
  kShift: number;
  shiftStride: number;
  permutations: number;
}

/**
 * A measure of synchrony of two sites. Every epoch gives `termCount` additive terms at a feature
 * (frequency and time); the measure is a function of a group's sums and its size. So a null needs
 * sums only, whatever the measure. Adding one is a file and a line in measure/registry.ts.
 */
export interface Measure<Id extends string = string> {
  id: Id;
  name: string;
  /** For column heads and readings: "ISPC" in "ISPC A". */
  shortName: string;
  /** One sentence for hover and focus. */
  sentence: string;
  formula: string;
  source: string;
  /** What a value of it does not say; null where nothing is to add. */
  caution: string | null;
  /** Whether phasors keep their amplitude (z in uV) or are of length 1 (u). */
  needsAmplitude: boolean;
  /** What the plan must say besides its id; absent where nothing. */
  settings?: readonly SettingField[];
  /** What it does where there is no synchrony; null where no formula holds. */
  chance: ChanceLevels | null;
  /** Smallest and largest possible value. */
  range: [number, number];
  /** 1 to 8. */
  termCount: number;
  /**
   * Set where the measure is the resultant length |sum u_j u_k*| / N: the kernels made for that may
   * then stand in for the three functions below. Others leave it out and lose nothing but speed.
   */
  isResultantLength?: true;
  /**
   * Overwrites `sums[feature * termCount + term]` with the sums over epochs. `jStarts[n]` and
   * `kStarts[n]`, where the stretches' real parts begin, need not be of the same epoch: that is
   * how trials are shuffled.
   */
  sumTerms(
    phasors: Float32Array,
    jStarts: Int32Array,
    kStarts: Int32Array,
    sums: Float64Array,
    rows: EpochRows,
  ): void;
  /**
   * Adds one epoch to `sums[((permutation * timeCount + t) * frequencyCount + f) * termCount + term]`
   * under each permutation's shifts. `j` and `k` hold the epoch's windows of the two sites,
   * `[sample][frequency][part]`, so that a shift moves whole rows.
   */
  addShiftedTerms(
    j: Float32Array,
    k: Float32Array,
    sums: Float64Array,
    window: ShiftedWindow,
  ): void;
  /** `values[i]` of a group of `epochCount` epochs from `sums[i * termCount + term]`. */
  values(sums: Float64Array, epochCount: number, values: Float64Array, count: number): void;
}
