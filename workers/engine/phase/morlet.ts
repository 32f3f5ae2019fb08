import { z } from 'zod';
import { convolver } from './convolve';
import { frequenciesSchema } from './frequencies';
import type { KernelShape, KernelWidth, PhaseKernel, PhaseMethod } from './method';

const cycleCount = z.number().min(1).max(50);

const schema = z.strictObject({
  method: z.literal('morlet'),
  frequencies: frequenciesSchema,
  /** Log-spaced over the frequencies from the first to the second; equal numbers: fixed. */
  cycles: z.strictObject({ from: cycleCount, to: cycleCount }),
});

type Settings = z.infer<typeof schema>;

const halfMaximum = Math.sqrt(2 * Math.log(2));

/**
 * Cycles of each of `count` frequencies, log-spaced by their place in the list from
 * `cycles.from` to `cycles.to`.
 */
export function cyclesOf(cycles: Settings['cycles'], count: number): number[] {
  return Array.from({ length: count }, (_, i) =>
    count === 1 ? cycles.from : cycles.from * (cycles.to / cycles.from) ** (i / (count - 1)),
  );
}

/**
 * Widths of the complex Morlet wavelet of `frequencyHz` and `cycles`: envelope sd
 * s = n / (2 pi f), full widths at half maximum 2 sqrt(2 ln 2) s in time and
 * sqrt(2 ln 2) / (pi s) in frequency (Cohen 2019). Half-length ceil(4 s fs) samples.
 */
export function morletWidth(frequencyHz: number, cycles: number, rateHz: number): KernelWidth {
  const s = cycles / (2 * Math.PI * frequencyHz);
  return {
    frequencyHz,
    words: `${Number(cycles.toPrecision(2))} cycles`,
    timeFwhmS: 2 * halfMaximum * s,
    frequencyFwhmHz: halfMaximum / (Math.PI * s),
    halfLength: Math.ceil(4 * s * rateHz),
  };
}

/**
 * Samples w(t) = exp(2 pi i f t) exp(-t^2 / (2 s^2)) at t = m / fs, |m| <= ceil(4 s fs).
 * Returns two arrays of 2 * halfLength + 1 values, unnormalised.
 */
export function morletKernel(frequencyHz: number, cycles: number, rateHz: number): PhaseKernel {
  const s = cycles / (2 * Math.PI * frequencyHz);
  const { halfLength } = morletWidth(frequencyHz, cycles, rateHz);
  const re = new Float64Array(2 * halfLength + 1);
  const im = new Float64Array(2 * halfLength + 1);
  for (let m = 0; m <= halfLength; m++) {
    const t = m / rateHz;
    const envelope = Math.exp(-(t * t) / (2 * s * s));
    const angle = 2 * Math.PI * frequencyHz * t;
    re[halfLength + m] = re[halfLength - m] = envelope * Math.cos(angle);
    im[halfLength + m] = envelope * Math.sin(angle);
    im[halfLength - m] = -im[halfLength + m];
  }
  return { halfLength, re, im };
}

export const morlet: PhaseMethod<Settings, typeof schema> = {
  id: 'morlet',
  name: 'Complex Morlet wavelets',
  sentence:
    'A sine wave inside a Gaussian bell: more cycles tell frequencies apart better and moments in time worse.',
  formula: 'w(t) = exp(2πift) · exp(−t² / 2s²), s = n / 2πf, |t| ≤ 4s',
  // Sources from memory.
  source: 'Tallon-Baudry et al. 1996; widths after Cohen 2019',
  schema,
  fields: [
    {
      kind: 'number',
      path: 'cycles.from',
      name: 'Cycles, from',
      label: 'cycles, lowest',
      unit: null,
      hint: 'Cycles of the wavelet at the lowest and the highest frequency. More cycles tell frequencies apart better and moments in time worse.',
      initial: '4',
    },
    {
      kind: 'number',
      path: 'cycles.to',
      name: 'Cycles, to',
      label: 'cycles, highest',
      unit: null,
      hint: null,
      initial: '8',
    },
  ],
  sharper: 'fewer cycles',
  shorter: 'take fewer cycles',
  // The schema holds cycles to 1 to 50, which make sense at any frequency.
  refuse: () => undefined,
  caution: () => null,
  widths(settings, frequenciesHz, rateHz) {
    const cycles = cyclesOf(settings.cycles, frequenciesHz.length);
    return frequenciesHz.map((hz, i) => morletWidth(hz, cycles[i], rateHz));
  },
  shapes(settings, frequenciesHz) {
    const cycles = cyclesOf(settings.cycles, frequenciesHz.length);
    return frequenciesHz.map((hz, i): KernelShape => {
      const s = cycles[i] / (2 * Math.PI * hz);
      return (t) => Math.exp(-(t * t) / (2 * s * s)) * Math.cos(2 * Math.PI * hz * t);
    });
  },
  analyser(settings, frequenciesHz, rateHz, geometry) {
    const cycles = cyclesOf(settings.cycles, frequenciesHz.length);
    return convolver(
      frequenciesHz.map((hz, i) => morletKernel(hz, cycles[i], rateHz)),
      geometry,
    );
  },
};
