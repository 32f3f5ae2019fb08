import type { Plan } from '../plan';

export type PhaseSettings = Plan['phase'];

/** How wide a kernel is: what the form shows beside each frequency. */
export interface KernelWidth {
  frequencyHz: number;
  cycles: number;
  /** Full width at half maximum of the envelope, seconds. */
  timeFwhmS: number;
  /** Full width at half maximum of the amplitude spectrum, hertz. */
  frequencyFwhmHz: number;
  /** Samples the kernel reaches to either side of its centre. */
  halfLength: number;
}

/**
 * A centred complex kernel, w[m] for m = -halfLength .. halfLength at index m + halfLength, with
 * w[-m] the conjugate of w[m], so that its spectrum is real.
 */
export interface PhaseKernel {
  halfLength: number;
  re: Float64Array;
  im: Float64Array;
}

/** Where the samples of one epoch lie, and which of them are kept. */
export interface EpochGeometry {
  /** Samples before and after the window. */
  guard: number;
  /** Samples of the window. */
  windowCount: number;
  /** Stored samples, counted from the window's first; ascending. */
  offsets: Int32Array;
}

/** Turns the samples of epochs into complex values at the stored samples. Not re-entrant. */
export interface PhaseAnalyser {
  /**
   * `first` and `second` are two real signals of guard + window + guard samples. Writes
   * `out[(signal * F + f) * S + s]`, real parts, and the same of `outIm`, imaginary parts;
   * allocates nothing.
   */
  transform(
    first: Float64Array,
    second: Float64Array,
    outRe: Float64Array,
    outIm: Float64Array,
  ): void;
  /** Sum of the kernel's absolute values, by frequency: the scale of |z| for a signal of size 1. */
  kernelSums: Float64Array;
}

/** A way to get phases. Adding one is one file and one line in phase/registry.ts. */
export interface PhaseMethod {
  id: PhaseSettings['method'];
  name: string;
  /** One sentence for hover and focus. */
  sentence: string;
  formula: string;
  source: string;
  /** Kernel widths by frequency; allocates no kernel, so any typed-in number may be asked. */
  widths(settings: PhaseSettings, frequenciesHz: number[], rateHz: number): KernelWidth[];
  /** The kernel of each frequency. */
  kernels(settings: PhaseSettings, frequenciesHz: number[], rateHz: number): PhaseKernel[];
  analyser(kernels: PhaseKernel[], geometry: EpochGeometry): PhaseAnalyser;
}
