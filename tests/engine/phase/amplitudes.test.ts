import { expect, test } from 'vitest';
import { phaseJob, phasesOfEpoch } from '../../../workers/engine/phase/phases';
import { guardSamples } from '../../../workers/engine/phase/guard';
import { axesOf } from '../../../workers/engine/prepare/axes';
import { samplePlan, sampleRecording, secondRecording } from '../sample-plan';

const plan = samplePlan({ measure: 'weighted-phase-lag-index' });
const axes = axesOf(plan, [sampleRecording([]), secondRecording()]);
const guard = guardSamples(plan.phase, axes.frequenciesHz, axes.samplingRateHz);
const length = 101 + 2 * guard;

/** |z| of the first site at 10 Hz and each kept time, for a 10 Hz tone of this amplitude in uV. */
function amplitudesOf(amplitudeUv: number): number[] {
  const job = phaseJob(plan, axes, 1);
  const tone = Float64Array.from({ length }, (_, i) => amplitudeUv * Math.cos((Math.PI * i) / 5));
  const other = tone.map((value) => value / amplitudeUv);
  const phasors = new Float32Array(job.layout.byteLength / 4);
  phasesOfEpoch(job, [tone, other, other], 0, phasors, 'epoch');
  const { samplesPerEpoch } = job.layout;
  return axes.timesS.map((_, t) => Math.hypot(phasors[t], phasors[t + samplesPerEpoch]));
}

test('measures weighted by amplitude get half the amplitude of a tone, in uV, at any size', () => {
  for (const amplitude of [1e-30, 0.02, 50, 1e30]) {
    for (const found of amplitudesOf(amplitude)) {
      // A cosine is half of each of two rotating vectors; leakage of the other is below 1e-3.
      expect(Math.abs(found / amplitude - 0.5)).toBeLessThan(1e-3);
    }
  }
});

test.each([1e-200, 1e200])('an amplitude of %s uV is refused, naming site and remedy', (size) => {
  expect(() => amplitudesOf(size)).toThrow(/F3 has an amplitude of .* µV in epoch.*Mend/);
});
