import FFT from 'fft.js';
import { phaseJob, phasesOfEpoch } from '../../../workers/engine/phase/phases';
import { cyclesOf, morletKernel } from '../../../workers/engine/phase/morlet';
import { guardSamples } from '../../../workers/engine/phase/guard';
import { samplePlan } from '../../engine/sample-plan';
import { uniform } from '../random';
import { agree, readF32, write, writeSettings, type Task } from '../task';

const rate = 512;
const epochs = 64;
const samples = 1024;
const times = 100;
const step = 8;
const frequencies = Array.from({ length: 30 }, (_, i) => 10 * 8 ** (i / 29));
const phase = {
  method: 'morlet' as const,
  frequencies: { kind: 'list' as const, hz: frequencies },
  cycles: { from: 3, to: 10 },
};
const guard = guardSamples(phase, frequencies, rate);
const windowCount = samples - 2 * guard;

/** Epochs stand in for sites: the work is the same. */
function job() {
  const sites = Array.from({ length: epochs }, (_, i) => `S${i}`);
  const base = samplePlan();
  const plan = samplePlan({
    sites,
    phase,
    epoch: { ...base.epoch, fromS: 0, toS: (windowCount - 1) / rate },
    times: { fromS: 0, toS: ((times - 1) * step) / rate, stepS: step / rate },
  });
  const timesS = Array.from({ length: times }, (_, i) => (i * step) / rate);
  const axes = { sites, pairs: [], frequenciesHz: frequencies, timesS, samplingRateHz: rate };
  return phaseJob(plan, axes, 1);
}

function load(folder: string) {
  const x = readF32(folder, 'epochs.f32');
  const work = job();
  const signals = Array.from({ length: epochs }, (_, e) =>
    Float64Array.from(x.subarray(e * samples, (e + 1) * samples)),
  );
  const phasors = new Float32Array(work.layout.byteLength / 4);
  return () => {
    phasesOfEpoch(work, signals, 0, phasors, 'the bench');
    return phasors;
  };
}

/** Real spectra of the centred kernels, for the twin. */
function kernelSpectra(): Float32Array {
  const fft = new FFT(samples);
  const out = new Float32Array(frequencies.length * samples);
  const cycles = cyclesOf(phase.cycles, frequencies.length);
  frequencies
    .map((hz, f) => morletKernel(hz, cycles[f], rate))
    .forEach(({ halfLength, re, im }, f) => {
      const centred = new Float64Array(2 * samples);
      for (let m = -halfLength; m <= halfLength; m++) {
        const at = 2 * ((m + samples) % samples);
        centred[at] = re[m + halfLength];
        centred[at + 1] = im[m + halfLength];
      }
      const spectrum = new Float64Array(2 * samples);
      fft.transform(spectrum, centred);
      for (let b = 0; b < samples; b++) out[f * samples + b] = spectrum[2 * b];
    });
  return out;
}

export const morletTask: Task = {
  id: '(e)',
  twin: 'morlet.py',
  name: 'Morlet, 1024-sample epochs, 30 frequencies, 100 kept times, folded',
  unit: 'thousand epochs/s',
  amount: epochs / 1000,
  repeats: 21,
  mustReach: 2,
  ambitious: 2.8,
  prepare(folder) {
    const random = uniform(7);
    write(
      folder,
      'epochs.f32',
      Float32Array.from({ length: epochs * samples }, () => random() - 0.5),
    );
    write(folder, 'kernels.f32', kernelSpectra());
    const size = samples;
    const settings = { epochs, samples, size, frequencies: frequencies.length, times, step };
    const centreBins = frequencies.map((hz) => (hz * samples) / rate);
    const cycles = frequencies.map((_, i) => 3 * (10 / 3) ** (i / (frequencies.length - 1)));
    const sigmaBins = centreBins.map((bin, i) => bin / cycles[i]);
    writeSettings(folder, { ...settings, first: guard, centreBins, sigmaBins });
  },
  load,
  compare(ours, twin) {
    const points = frequencies.length * times;
    const apart = new Float64Array(twin.length);
    for (let e = 0; e < epochs; e++) {
      for (let x = 0; x < points; x++) {
        apart[(e * points + x) * 2] = ours[e * 2 * points + x];
        apart[(e * points + x) * 2 + 1] = ours[(e * 2 + 1) * points + x];
      }
    }
    // Where a signal is weak, f32 spectra turn its phase a little.
    agree(apart, twin, 2e-2, 'phasor');
  },
};
