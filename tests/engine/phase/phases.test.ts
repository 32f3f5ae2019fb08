import { describe, expect, test } from 'vitest';
import { phaseJob, phasesOfEpoch } from '../../../workers/engine/phase/phases';
import { guardSamples } from '../../../workers/engine/phase/guard';
import { axesOf } from '../../../workers/engine/prepare/axes';
import { samplePlan, sampleRecording, secondRecording } from '../sample-plan';

const plan = samplePlan();
const recordings = [sampleRecording([]), secondRecording()];
const axes = axesOf(plan, recordings);
const rate = axes.samplingRateHz;
const guard = guardSamples(plan.phase, axes.frequenciesHz, rate);
const first = -20;
const length = 101 + 2 * guard;

/** A cosine whose phase at the event is `phaseRad`. */
function tone(hz: number, phaseRad: number, amplitude = 1): Float64Array {
  return Float64Array.from({ length }, (_, i) => {
    const t = (i - guard + first) / rate;
    return amplitude * Math.cos(2 * Math.PI * hz * t + phaseRad);
  });
}

function phasesOf(samples: Float64Array[]): { angle(site: number, f: number, t: number): number } {
  const job = phaseJob(plan, axes, 2);
  const phasors = new Float32Array(job.layout.byteLength / 4);
  phasesOfEpoch(job, samples, 1, phasors, 'epoch');
  const { epochCount, samplesPerEpoch, samplesPerFrequency } = job.layout;
  return {
    angle(site, f, t) {
      const at = (site * epochCount + 1) * 2 * samplesPerEpoch + f * samplesPerFrequency + t;
      const [x, y] = [phasors[at], phasors[at + samplesPerEpoch]];
      expect(Math.hypot(x, y)).toBeCloseTo(1, 6);
      return Math.atan2(y, x);
    },
  };
}

describe('phasesOfEpoch', () => {
  test('a cosine of phase phi has phase 2 pi f t + phi at every kept time and each site its own', () => {
    const phases = [0, 1, -2];
    const { angle } = phasesOf(phases.map((phase) => tone(10, phase)));
    phases.forEach((phase, site) =>
      axes.timesS.forEach((time, t) => {
        const off = angle(site, 0, t) - (2 * Math.PI * 10 * time + phase);
        // Leakage of the negative frequency, exp(-2 n^2) at n = 5 cycles, and the cut at 4 s: < 1e-3.
        expect(Math.abs(Math.sin(off / 2))).toBeLessThan(1e-3);
      }),
    );
  });

  test.each([1e-300, 1e300])('an amplitude of %s changes no phase', (amplitude) => {
    const usual = phasesOf([tone(10, 0), tone(10, 1), tone(10, 2)]);
    const scaled = phasesOf([0, 1, 2].map((phase) => tone(10, phase, amplitude)));
    for (let site = 0; site < 3; site++) {
      expect(scaled.angle(site, 0, 2)).toBeCloseTo(usual.angle(site, 0, 2), 5);
    }
  });

  test('a flat site is an error that names it, never a NaN', () => {
    const samples = [tone(10, 0), new Float64Array(length), tone(10, 2)];
    expect(() => phasesOf(samples)).toThrow('C3 is flat in epoch');
  });

  test.each([NaN, Infinity])('a sample of %s is an error that names the site', (value) => {
    const bad = tone(10, 0);
    bad[40] = value;
    expect(() => phasesOf([tone(10, 0), tone(10, 1), bad])).toThrow('P4 has a value that is no');
  });

  test('a site with nothing at a kept time is an error that names the frequency', () => {
    const early = new Float64Array(length);
    early[0] = 1;
    expect(() => phasesOf([early, tone(10, 0), tone(10, 1)])).toThrow('F3 has no signal at 10 Hz');
  });

  test('no sample beyond the guard of a kept time reaches its phase', () => {
    const quiet = [tone(10, 0.3), tone(10, 1), tone(10, 2)];
    const loud = quiet.map((signal) => signal.slice());
    // Kept times begin at the event, 20 samples into the window; the kernel reaches 32 before it.
    for (let i = 0; i < 20; i++) loud[0][i] = 100;
    expect(phasesOf(loud).angle(0, 0, 0)).toBeCloseTo(phasesOf(quiet).angle(0, 0, 0), 5);
  });
});
