import type { z } from 'zod';
import type { PhaseSettings } from './registry';

/** How wide a kernel is: what the form shows beside each frequency. */
export interface KernelWidth {
  frequencyHz: number;
  /** What makes the kernel this wide, in words: "5 cycles". */
  words: string;
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
  /** By frequency, the scale of |z| for a signal of size 1: sum of |w|, or a filter's gain. */
  kernelSums: Float64Array;
}

/** The real part of a kernel over time in seconds: 1 at 0, and 0 outside. */
export type KernelShape = (timeS: number) => number;

/** One setting of a method as the form asks for it; what is typed is checked by the schema. */
export type PhaseField = {
  /** Where it stands below `phase` in the plan: "cycles.from". */
  path: string;
  /** Its name in lists of issues and changes. */
  name: string;
  /** Its name above the control. */
  label: string;
  /** One sentence for hover and focus; null where the label says it. */
  hint: string | null;
  /** What a new plan starts with, as text. */
  initial: string;
} & (
  | { kind: 'number'; unit: string | null }
  | { kind: 'choice'; options: readonly { value: string; label: string }[] }
);

/**
 * A way to get phases. Adding one is one file and one line in phase/registry.ts: plan schema, form,
 * cautions and list of changes read what stands here.
 */
export interface PhaseMethod<
  Settings extends { method: string } = PhaseSettings,
  Schema extends z.ZodType = z.ZodType,
> {
  id: Settings['method'];
  name: string;
  /** One sentence for hover and focus. */
  sentence: string;
  formula: string;
  source: string;
  /** Of the plan's `phase`: `method`, `frequencies`, and the method's own settings. */
  schema: Schema;
  /** The own settings, in the order of the form. */
  fields: readonly PhaseField[];
  /** What makes its kernels narrower in time, for cautions: "fewer cycles". */
  sharper: string;
  /** What makes its guard shorter, for remedies: "take fewer cycles". */
  shorter: string;
  /**
   * Refuses settings that make no sense at these frequencies or this sampling rate.
   * @throws PlanError naming field, value and remedy.
   */
  refuse(settings: Settings, frequenciesHz: number[], rateHz: number): void;
  /** What can mislead with these settings; null when nothing does. */
  caution(settings: Settings, frequenciesHz: number[]): string | null;
  /** Kernel widths by frequency; allocates no kernel, so any typed-in number may be asked. */
  widths(settings: Settings, frequenciesHz: number[], rateHz: number): KernelWidth[];
  /** By frequency, the kernel to draw. */
  shapes(settings: Settings, frequenciesHz: number[]): KernelShape[];
  analyser(
    settings: Settings,
    frequenciesHz: number[],
    rateHz: number,
    geometry: EpochGeometry,
  ): PhaseAnalyser;
}
