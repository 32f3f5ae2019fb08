import seedrandom from 'seedrandom';
import {
  computePairs,
  conclude,
  drawPermutations,
  drawsByteLength,
  epochBlocks,
  mergeBlocks,
  type Axes,
  type MeasureId,
  type NullId,
  type Outcome,
  type Plan,
  type RunCounts,
  type RunMaps,
} from '../../../workers/engine';
import { layoutOf } from '../../../workers/engine/phase/phases';
import { samplePlan } from '../sample-plan';

/** Phase in radians of one site at one sample of one epoch; epochs of A come first. */
export type PhaseOf = (site: number, epoch: number, frequency: number, sample: number) => number;

export interface TinyOptions {
  nullId?: NullId;
  measureId?: MeasureId;
  siteCount?: number;
  epochsA?: number;
  epochsB?: number;
  frequencyCount?: number;
  timeCount?: number;
  /** Samples of the window; the kept times are every second one. */
  windowSamples?: number;
  test?: Partial<Plan['test']>;
}

/** A plan, its axes and its phases, small enough to be run hundreds of times. */
export interface TinyRun {
  plan: Plan;
  axes: Axes;
  counts: RunCounts;
  phases: SharedArrayBuffer;
}

const rateHz = 100;

export function tinyRun(phaseOf: PhaseOf, options: TinyOptions = {}): TinyRun {
  const { siteCount = 3, frequencyCount = 2, timeCount = 4 } = options;
  const { epochsA = 9, epochsB = 7, windowSamples = 2 * timeCount } = options;
  const sites = Array.from({ length: siteCount }, (_, i) => `S${i + 1}`);
  const hz = Array.from({ length: frequencyCount }, (_, i) => 5 + i);
  const base = samplePlan();
  const plan = samplePlan({
    sites,
    measure: options.measureId ?? 'ispc',
    null: options.nullId ?? 'labels',
    ...(options.nullId === 'labels-within-blocks'
      ? { nullSettings: { by: 'epochs', size: 8 } }
      : {}),
    epoch: { ...base.epoch, fromS: 0, toS: (windowSamples - 1) / rateHz },
    phase: { ...base.phase, frequencies: { kind: 'list', hz } },
    times: { fromS: 0, toS: (2 * (timeCount - 1)) / rateHz, stepS: 2 / rateHz },
    test: { ...base.test, permutations: 99, ...options.test },
  });
  const axes: Axes = {
    sites,
    pairs: sites.flatMap((_, j) =>
      sites.slice(j + 1).map((_site, i): [number, number] => [j, j + 1 + i]),
    ),
    frequenciesHz: hz,
    timesS: Array.from({ length: timeCount }, (_, t) => (2 * t) / rateHz),
    samplingRateHz: rateHz,
  };
  const counts = { epochsA, epochsB, blocks: blocksOf(plan, epochsA, epochsB) };
  return { plan, axes, counts, phases: fillPhases(plan, axes, counts, phaseOf) };
}

/** As if the epochs of A and B had taken turns in time as long as there were both. */
function blocksOf(plan: Plan, epochsA: number, epochsB: number): number[] | undefined {
  const epoch = (onsetS: number) => ({ recording: 'one', onsetS });
  const a = Array.from({ length: epochsA }, (_, n) => epoch(2 * n));
  const b = Array.from({ length: epochsB }, (_, n) => epoch(2 * n + 1));
  return epochBlocks(plan, [...a, ...b]);
}

function fillPhases(plan: Plan, axes: Axes, counts: RunCounts, phaseOf: PhaseOf) {
  const layout = layoutOf(plan, axes, counts.epochsA + counts.epochsB);
  const buffer = new SharedArrayBuffer(layout.byteLength);
  const phasors = new Float32Array(buffer);
  const whole = layout.samplesPerFrequency !== axes.timesS.length;
  let at = 0;
  for (let site = 0; site < layout.siteCount; site++) {
    for (let epoch = 0; epoch < layout.epochCount; epoch++, at += layout.samplesPerEpoch) {
      for (let f = 0; f < layout.frequencyCount; f++) {
        for (let s = 0; s < layout.samplesPerFrequency; s++, at++) {
          const phaseRad = phaseOf(site, epoch, f, whole ? s : 2 * s);
          phasors[at] = Math.cos(phaseRad);
          phasors[at + layout.samplesPerEpoch] = Math.sin(phaseRad);
        }
      }
    }
  }
  return buffer;
}

export function drawAll(run: TinyRun): SharedArrayBuffer {
  const draws = new SharedArrayBuffer(drawsByteLength(run.plan, run.axes, run.counts));
  const range = { from: 0, to: run.plan.test.permutations };
  drawPermutations(run.plan, run.axes, run.counts, range, draws);
  return draws;
}

/** All pairs in one block. */
export function mapsOf(run: TinyRun, draws: ArrayBufferLike = drawAll(run)): RunMaps {
  const range = { from: 0, to: run.axes.pairs.length };
  const phases = { buffer: run.phases, ...run.counts };
  const block = computePairs(run.plan, run.axes, range, phases, { buffer: draws });
  return mergeBlocks([block], run.axes, run.plan.test);
}

export function outcomeOf(run: TinyRun, maps: RunMaps = mapsOf(run)): Promise<Outcome> {
  return conclude(run.plan, run.axes, run.counts, maps);
}

/** Uniform phases, independent at every site, epoch, frequency and sample. */
export function noise(seed: string): PhaseOf {
  const random = seedrandom(seed);
  return () => random() * 2 * Math.PI;
}
