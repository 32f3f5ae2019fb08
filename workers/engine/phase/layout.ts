import type { Axes } from '../types';

/**
 * Where the phasors of a run lie (unit vectors u, or z in uV for measures that weight by amplitude):
 * Float32,
 * `phasors[((site * epochCount + epoch) * 2 + part) * samplesPerEpoch + f * samplesPerFrequency + s]`,
 * part 0 real and 1 imaginary; epochs of A before those of B. Nulls that shift in time keep every
 * sample of the window; the others keep only the plan's times, so memory does not pay for the rest.
 */
export interface PhaseLayout {
  siteCount: number;
  epochCount: number;
  frequencyCount: number;
  /** Kept times, or all samples of the window. */
  samplesPerFrequency: number;
  /** For each of the plan's times, its index among the stored samples. */
  keptSamples: Int32Array;
  /** frequencyCount * samplesPerFrequency. */
  samplesPerEpoch: number;
  byteLength: number;
}

export interface WindowSamples {
  /** First sample of the window relative to the event, round(fromS * rate). */
  first: number;
  count: number;
  /** Offsets of the plan's times from the window's first sample. */
  kept: Int32Array;
}

/** States the layout for a run's axes; allocates nothing but the index list. */
export function phaseLayout(
  axes: Axes,
  epochCount: number,
  window: WindowSamples,
  wholeWindow: boolean,
): PhaseLayout {
  const siteCount = axes.sites.length;
  const frequencyCount = axes.frequenciesHz.length;
  const samplesPerFrequency = wholeWindow ? window.count : window.kept.length;
  const keptSamples = wholeWindow ? window.kept : Int32Array.from(window.kept, (_, i) => i);
  const samplesPerEpoch = frequencyCount * samplesPerFrequency;
  return {
    siteCount,
    epochCount,
    frequencyCount,
    samplesPerFrequency,
    keptSamples,
    samplesPerEpoch,
    byteLength: siteCount * epochCount * 2 * samplesPerEpoch * Float32Array.BYTES_PER_ELEMENT,
  };
}
