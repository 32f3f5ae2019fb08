import { describe, expect, test } from 'vitest';
import { phaseJob, phasesOfEpoch } from '../../../workers/engine/phase/phases';
import { guardSamples } from '../../../workers/engine/phase/guard';
import type { PhaseSettings } from '../../../workers/engine/phase/registry';
import type { Axes } from '../../../workers/engine/types';
import { samplePlan } from '../sample-plan';

const rate = 100;
const hz = [10];
const frequencies = { kind: 'list' as const, hz };
const methods: [string, PhaseSettings][] = [
  ['morlet', { method: 'morlet', frequencies, cycles: { from: 5, to: 5 } }],
  ['stft', { method: 'stft', frequencies, taperS: 0.5 }],
  [
    'filter-hilbert',
    { method: 'filter-hilbert', frequencies, halfWidth: { value: 0.2, unit: 'share' } },
  ],
];
const axes: Axes = {
  sites: ['F3', 'C3'],
  pairs: [[0, 1]],
  frequenciesHz: hz,
  timesS: [0, 0.4],
  samplingRateHz: rate,
};

describe.each(methods)('phases by %s', (_, phase) => {
  const plan = samplePlan({
    sites: axes.sites,
    phase,
    times: { fromS: 0, toS: 0.4, stepS: 0.4 },
  });
  const guard = guardSamples(phase, hz, rate);
  const wave = (amplitude: number) =>
    Float64Array.from(
      { length: 101 + 2 * guard },
      (_, i) => amplitude * (Math.cos(0.63 * i) + 0.1 * Math.sin(1.7 * i)),
    );
  const phases = (...signals: Float64Array[]) => {
    const job = phaseJob(plan, axes, 1);
    const out = new Float32Array(job.layout.byteLength / 4);
    phasesOfEpoch(job, signals, 0, out, 'the epoch at 1 s of one.edf');
    return out;
  };

  test('amplitudes of 1e-30 and 1e30 µV have the phases of 1 µV', () => {
    const plain = phases(wave(1), wave(1));
    const hard = phases(wave(1e-30), wave(1e30));
    // Two units in the last place of an f32 near 1.
    hard.forEach((value, i) => expect(Math.abs(value - plain[i])).toBeLessThan(2.4e-7));
  });

  test('a value that is no number is refused, naming site and place', () => {
    for (const bad of [NaN, Infinity]) {
      const broken = wave(1);
      broken[guard + 3] = bad;
      expect(() => phases(wave(1), broken)).toThrow(/C3 .*the epoch at 1 s of one\.edf/);
    }
  });

  test('a flat site is refused, naming site and place', () => {
    expect(() => phases(wave(0), wave(1))).toThrow(/F3 is flat in the epoch at 1 s of one\.edf/);
  });
});
