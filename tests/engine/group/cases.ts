import type { Plan } from '../../../workers/engine';
import type { Axes } from '../../../workers/engine/types';
import { samplePlan } from '../sample-plan';

/** Axes of `pairs` pairs over three sites at most, with a frequency-by-time grid. */
export function gridAxes(pairs: number, frequencies: number, times: number): Axes {
  const all: [number, number][] = [
    [0, 1],
    [0, 2],
    [1, 2],
  ];
  return {
    sites: ['F3', 'C3', 'P4'],
    pairs: all.slice(0, pairs),
    frequenciesHz: Array.from({ length: frequencies }, (_, f) => 8 + f),
    timesS: Array.from({ length: times }, (_, t) => t / 10),
    samplingRateHz: 100,
  };
}

export const groupTest = (change: Partial<Plan['test']> = {}): Plan['test'] => ({
  ...samplePlan().test,
  permutations: 100_000,
  ...change,
});

/** One participant a row of numbers. */
export const participantsOf = (rows: number[][]) =>
  rows.map((row, i) => ({ name: `P${i + 1}`, values: Float32Array.from(row) }));
