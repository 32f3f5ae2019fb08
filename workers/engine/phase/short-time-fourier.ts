import { z } from 'zod';
import { PlanError } from '../errors';
import { convolver } from './convolve';
import { frequenciesSchema } from './frequencies';
import type { KernelShape, KernelWidth, PhaseKernel, PhaseMethod } from './method';

const schema = z.strictObject({
  method: z.literal('stft'),
  frequencies: frequenciesSchema,
  /** Whole length of the Hann taper, seconds, the same at all frequencies. */
  taperS: z.number().positive('must be above 0 s').max(60),
});

type Settings = z.infer<typeof schema>;

/** Below this a taper's band reaches towards 0 Hz. Common practice, no source. */
const wantedCycles = 3;

/** Absorbs the rounding of decimal lengths, far below a sample at any sampling rate. */
const slack = 1e-9;

/**
 * Widths of a Hann-tapered wave of `taperS` seconds: the taper is at half its height for half its
 * length, and its amplitude spectrum sinc(f T) / (1 - (f T)^2) is 1/2 exactly at f = 1/T, so 2 / T
 * wide (Harris 1978). Reaches floor(T fs / 2) samples.
 */
function widthOf(frequencyHz: number, taperS: number, rateHz: number): KernelWidth {
  return {
    frequencyHz,
    words: `${Number((frequencyHz * taperS).toPrecision(2))} cycles`,
    timeFwhmS: taperS / 2,
    frequencyFwhmHz: 2 / taperS,
    halfLength: Math.floor((taperS * rateHz) / 2 + slack),
  };
}

function taperAt(timeS: number, taperS: number): number {
  return Math.abs(timeS) < taperS / 2 ? Math.cos((Math.PI * timeS) / taperS) ** 2 : 0;
}

/**
 * Samples w(t) = exp(2 pi i f t) cos^2(pi t / T) at t = m / fs, |m| <= floor(T fs / 2).
 * Returns two arrays of 2 * halfLength + 1 values, unnormalised.
 */
function kernelOf(frequencyHz: number, taperS: number, rateHz: number): PhaseKernel {
  const { halfLength } = widthOf(frequencyHz, taperS, rateHz);
  const re = new Float64Array(2 * halfLength + 1);
  const im = new Float64Array(2 * halfLength + 1);
  for (let m = 0; m <= halfLength; m++) {
    const t = m / rateHz;
    const taper = taperAt(t, taperS);
    const angle = 2 * Math.PI * frequencyHz * t;
    re[halfLength + m] = re[halfLength - m] = taper * Math.cos(angle);
    im[halfLength + m] = taper * Math.sin(angle);
    im[halfLength - m] = -im[halfLength + m];
  }
  return { halfLength, re, im };
}

export const shortTimeFourier: PhaseMethod<Settings, typeof schema> = {
  id: 'stft',
  name: 'Short-time Fourier',
  sentence:
    'A sine wave inside a Hann bell of one length at all frequencies: time and frequency are equally sharp everywhere.',
  formula: 'w(t) = exp(2πift) · cos²(πt / T), |t| ≤ T / 2',
  // Sources from memory.
  source: 'Gabor 1946; widths of the taper after Harris 1978',
  schema,
  fields: [
    {
      kind: 'number',
      path: 'taperS',
      name: 'Taper length',
      label: 'taper length',
      unit: 's',
      hint: 'Whole length of the bell. Twice as long tells frequencies twice as close apart, and moments half as well. At least one cycle of the lowest frequency must fit, better three.',
      initial: '0.75',
    },
  ],
  sharper: 'a shorter taper',
  shorter: 'take a shorter taper',
  refuse({ taperS }, [lowest]) {
    if (lowest * taperS >= 1 - slack) return;
    throw new PlanError(
      'phase.taperS',
      `${taperS} s hold ${Number((lowest * taperS).toPrecision(2))} cycles of ${Number(lowest.toPrecision(4))} Hz, and one is the least that has a phase: take at least ${Math.ceil(1000 / lowest) / 1000} s, or raise the lowest frequency.`,
    );
  },
  caution({ taperS }, [lowest]) {
    if (lowest * taperS >= wantedCycles) return null;
    return `At ${Number(lowest.toPrecision(3))} Hz the taper holds ${Number((lowest * taperS).toPrecision(2))} cycles: below ${wantedCycles} its band reaches towards 0 Hz, and slow drift mixes into the phases.`;
  },
  widths: ({ taperS }, frequenciesHz, rateHz) =>
    frequenciesHz.map((hz) => widthOf(hz, taperS, rateHz)),
  shapes: ({ taperS }, frequenciesHz) =>
    frequenciesHz.map(
      (hz): KernelShape =>
        (t) =>
          taperAt(t, taperS) * Math.cos(2 * Math.PI * hz * t),
    ),
  analyser({ taperS }, frequenciesHz, rateHz, geometry) {
    return convolver(
      frequenciesHz.map((hz) => kernelOf(hz, taperS, rateHz)),
      geometry,
    );
  },
};
