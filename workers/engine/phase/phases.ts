import { measureOf } from '../measure/registry';
import type { Plan } from '../plan';
import { windowSamples } from '../prepare/grid';
import { flatError } from '../prepare/signal';
import type { Axes } from '../types';
import { guardSamples } from './guard';
import { phaseLayout, type PhaseLayout } from './layout';
import type { PhaseAnalyser } from './method';
import { phaseMethod } from './registry';
import { keepsWholeWindow } from './window';

/** |z| below this share of what the kernel can give is rounding, not a signal. */
const noSignal = 1e-13;

/** Amplitudes in uV that f32 holds with all its digits. */
const leastAmplitude = 1e-37;
const mostAmplitude = 1e37;

/** All that is made once for the phases of many epochs of one plan. */
export interface PhaseJob {
  layout: PhaseLayout;
  sites: string[];
  frequenciesHz: number[];
  analyser: PhaseAnalyser;
  /** Whether z is kept with its amplitude, in uV, or made a unit vector. */
  keepsAmplitude: boolean;
  /** Scratch: two signals scaled to 1, and their complex values. */
  first: Float64Array;
  second: Float64Array;
  re: Float64Array;
  im: Float64Array;
}

/** The layout of a run's phases for its plan. */
export function layoutOf(plan: Plan, axes: Axes, epochCount: number): PhaseLayout {
  const window = windowSamples(plan, axes.samplingRateHz);
  return phaseLayout(axes, epochCount, window, keepsWholeWindow(plan));
}

export function phaseJob(plan: Plan, axes: Axes, epochCount: number): PhaseJob {
  const { frequenciesHz, samplingRateHz: rate } = axes;
  const window = windowSamples(plan, rate);
  const guard = guardSamples(plan.phase, frequenciesHz, rate);
  const layout = phaseLayout(axes, epochCount, window, keepsWholeWindow(plan));
  const offsets = keepsWholeWindow(plan)
    ? Int32Array.from({ length: window.count }, (_, i) => i)
    : window.kept;
  const method = phaseMethod(plan.phase.method);
  const values = 2 * layout.samplesPerEpoch;
  const length = window.count + 2 * guard;
  return {
    layout,
    sites: axes.sites,
    frequenciesHz,
    analyser: method.analyser(plan.phase, frequenciesHz, rate, {
      guard,
      windowCount: window.count,
      offsets,
    }),
    keepsAmplitude: measureOf(plan.measure).needsAmplitude,
    first: new Float64Array(length),
    second: new Float64Array(length),
    re: new Float64Array(values),
    im: new Float64Array(values),
  };
}

/**
 * Writes the phasors of one epoch, all sites, into `phasors` by the layout of phase/layout.ts: of
 * length 1, or for measures that weight by amplitude z over its kernel's sum, in uV. `samples` is
 * [site][guard + window + guard]. Computed in f64, stored in f32.
 * @throws RangeError naming site, epoch and recording (`where`) when a signal is flat, not finite,
 * or has nothing at a frequency: a phase is never a NaN.
 */
export function phasesOfEpoch(
  job: PhaseJob,
  samples: Float64Array[],
  epochIndex: number,
  phasors: Float32Array,
  where: string,
): void {
  const { sites, analyser, first, second, re, im } = job;
  for (let site = 0; site < sites.length; site += 2) {
    const partner = Math.min(site + 1, sites.length - 1);
    const scale = scaleInto(first, samples[site], sites[site], where);
    const partnerScale = scaleInto(second, samples[partner], sites[partner], where);
    analyser.transform(first, second, re, im);
    store(job, { which: 0, site, scale }, epochIndex, phasors, where);
    if (partner === site) continue;
    store(job, { which: 1, site: partner, scale: partnerScale }, epochIndex, phasors, where);
  }
}

/**
 * Scales a signal to a largest value of 1, so that no amplitude overflows or vanishes; returns that
 * value.
 */
function scaleInto(out: Float64Array, signal: Float64Array, site: string, where: string): number {
  let most = 0;
  for (let i = 0; i < signal.length; i++) {
    const size = Math.abs(signal[i]);
    if (!(size <= Number.MAX_VALUE)) {
      throw new RangeError(
        `${site} has a value that is no number in ${where}. Leave the site or the epoch out.`,
      );
    }
    if (size > most) most = size;
  }
  if (most === 0) throw flatError(site, where);
  for (let i = 0; i < signal.length; i++) out[i] = signal[i] / most;
  return most;
}

/** One signal of the analyser's two: whose it is, and what it was divided by. */
interface Transformed {
  which: 0 | 1;
  site: number;
  scale: number;
}

function store(
  job: PhaseJob,
  { which, site, scale }: Transformed,
  epochIndex: number,
  phasors: Float32Array,
  where: string,
): void {
  const { layout, analyser, re, im } = job;
  const { epochCount, samplesPerEpoch, samplesPerFrequency } = layout;
  const from = which * samplesPerEpoch;
  const real = (site * epochCount + epochIndex) * 2 * samplesPerEpoch;
  const imaginary = real + samplesPerEpoch;
  for (let i = 0; i < samplesPerEpoch; i++) {
    const x = re[from + i];
    const y = im[from + i];
    const size = Math.sqrt(x * x + y * y);
    const f = Math.floor(i / samplesPerFrequency);
    if (!(size > noSignal * analyser.kernelSums[f])) {
      throw new RangeError(
        `${job.sites[site]} has no signal at ${Number(job.frequenciesHz[f].toPrecision(4))} Hz in ${where}, so it has no phase. Leave the site or the epoch out.`,
      );
    }
    const length = job.keepsAmplitude
      ? amplitudeOf((size / analyser.kernelSums[f]) * scale, job.sites[site], where)
      : 1;
    phasors[real + i] = (x / size) * length;
    phasors[imaginary + i] = (y / size) * length;
  }
}

function amplitudeOf(amplitudeUv: number, site: string, where: string): number {
  if (amplitudeUv > leastAmplitude && amplitudeUv < mostAmplitude) return amplitudeUv;
  throw new RangeError(
    `${site} has an amplitude of ${amplitudeUv.toPrecision(2)} µV in ${where}, beyond what a measure weighted by amplitude can hold. Mend the recording's physical range, or choose a measure of phase alone.`,
  );
}
