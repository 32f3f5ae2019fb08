import {
  drawPermutations,
  drawsByteLength,
  type Axes,
  type NullId,
  type Plan,
} from '../../workers/engine';
import { layoutOf } from '../../workers/engine/phase/phases';
import { samplePlan } from '../engine/sample-plan';
import { uniform } from './random';

export interface RunSizes {
  sites: number;
  epochsA: number;
  epochsB: number;
  frequencies: number;
  times: number;
  permutations: number;
  nullId?: NullId;
}

/** A run without recordings: phases that drift over time, and every permutation's draws. */
export interface SimulatedRun {
  plan: Plan;
  axes: Axes;
  phases: { buffer: SharedArrayBuffer; epochsA: number; epochsB: number };
  draws: { buffer: SharedArrayBuffer };
}

const stepS = 0.02;
const rate = 100;

export function planOf(sizes: RunSizes): { plan: Plan; axes: Axes } {
  const sites = Array.from({ length: sizes.sites }, (_, i) => `S${i + 1}`);
  const hz = Array.from({ length: sizes.frequencies }, (_, i) => 4 + i);
  const base = samplePlan();
  const toS = stepS * (sizes.times - 1);
  const plan = samplePlan({
    sites,
    null: sizes.nullId ?? 'labels',
    epoch: { ...base.epoch, fromS: 0, toS },
    phase: { ...base.phase, frequencies: { kind: 'list', hz } },
    times: { fromS: 0, toS, stepS },
    test: { ...base.test, permutations: sizes.permutations, clusterFormingZ: 2 },
  });
  const pairs = sites.flatMap((_, j) =>
    sites.slice(j + 1).map((_site, i): [number, number] => [j, j + 1 + i]),
  );
  const timesS = Array.from({ length: sizes.times }, (_, t) => stepS * t);
  return { plan, axes: { sites, pairs, frequenciesHz: hz, timesS, samplingRateHz: rate } };
}

export function simulatedRun(sizes: RunSizes, seed = 11): SimulatedRun {
  const { plan, axes } = planOf(sizes);
  const { epochsA, epochsB } = sizes;
  const layout = layoutOf(plan, axes, epochsA + epochsB);
  const buffer = new SharedArrayBuffer(layout.byteLength);
  drift(new Float32Array(buffer), layout, uniform(seed));
  const counts = { epochsA, epochsB };
  const draws = new SharedArrayBuffer(drawsByteLength(plan, axes, counts));
  drawPermutations(plan, axes, counts, { from: 0, to: sizes.permutations }, draws);
  return { plan, axes, phases: { buffer, ...counts }, draws: { buffer: draws } };
}

/** Each row begins anywhere on the circle and walks on by up to 0.7 radians a sample. */
function drift(
  phasors: Float32Array,
  layout: { samplesPerEpoch: number; samplesPerFrequency: number },
  random: () => number,
): void {
  const { samplesPerEpoch, samplesPerFrequency } = layout;
  for (let start = 0; start < phasors.length; start += 2 * samplesPerEpoch) {
    for (let f = 0; f < samplesPerEpoch; f += samplesPerFrequency) {
      let angle = 2 * Math.PI * random();
      for (let s = f; s < f + samplesPerFrequency; s++) {
        angle += 1.4 * (random() - 0.5);
        phasors[start + s] = Math.cos(angle);
        phasors[start + samplesPerEpoch + s] = Math.sin(angle);
      }
    }
  }
}
