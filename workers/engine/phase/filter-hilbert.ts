import { z } from 'zod';
import { PlanError } from '../errors';
import { analyticAnalyser } from './analytic';
import { bandEnvelope, bandOf, bandPass, envelopeFwhmS, gainFwhmHz, type Band } from './band-pass';
import { frequenciesSchema } from './frequencies';
import type { KernelShape, KernelWidth, PhaseMethod } from './method';

/** A wider band has its lower edge near 0 Hz and a filter without end. */
const widestShare = 0.9;

const schema = z.strictObject({
  method: z.literal('filter-hilbert'),
  /** Centres of the bands. */
  frequencies: frequenciesSchema,
  /** From a band's centre to either edge: a share of the centre frequency, or hertz. */
  halfWidth: z
    .strictObject({
      value: z.number().positive('must be above 0'),
      unit: z.enum(['share', 'Hz']),
    })
    .refine(({ value, unit }) => unit === 'Hz' || value <= widestShare, {
      path: ['value'],
      message: `must be at most ${widestShare} of the frequency`,
    }),
});

type Settings = z.infer<typeof schema>;

/** A wider band has no one frequency that its phase could belong to. Common practice, no source. */
const wideShare = 0.5;

function halfWidthHz({ value, unit }: Settings['halfWidth'], frequencyHz: number): number {
  return unit === 'share' ? value * frequencyHz : value;
}

function bandAt({ halfWidth }: Settings, frequencyHz: number, rateHz: number): Band {
  const half = halfWidthHz(halfWidth, frequencyHz);
  return bandOf(frequencyHz - half, frequencyHz + half, rateHz);
}

function widthOf(settings: Settings, frequencyHz: number, rateHz: number): KernelWidth {
  const half = halfWidthHz(settings.halfWidth, frequencyHz);
  const { lowHz, highHz, halfLength } = bandAt(settings, frequencyHz, rateHz);
  const edge = (hz: number) => String(Number(hz.toPrecision(3)));
  return {
    frequencyHz,
    words: `${edge(lowHz)} to ${edge(highHz)} Hz`,
    timeFwhmS: envelopeFwhmS(half, halfLength / rateHz),
    frequencyFwhmHz: gainFwhmHz(half, halfLength, rateHz),
    halfLength,
  };
}

export const filterHilbert: PhaseMethod<Settings, typeof schema> = {
  id: 'filter-hilbert',
  name: 'Filter and Hilbert transform',
  sentence:
    'A band-pass filter around each frequency that delays nothing, then the analytic signal: you choose the band, and its phase is that of everything in it.',
  formula:
    'y = h ∗ x, h: sinc band-pass f ± Δ under a Hamming taper, 2·round(1.5 fₛ / (f − Δ)) + 1 taps; z = y + i H(y)',
  // Sources from memory.
  source: 'Gabor 1946; windowed-sinc design after Oppenheim and Schafer 1989',
  schema,
  fields: [
    {
      kind: 'number',
      path: 'halfWidth.value',
      name: 'Half width of the bands',
      label: 'half width of bands',
      unit: null,
      hint: 'From the centre of a band to either edge, where the gain is about one half. The filter is three cycles of the lower edge long, so a band that begins low needs a long guard.',
      initial: '0.2',
    },
    {
      kind: 'choice',
      path: 'halfWidth.unit',
      name: 'Half width, unit',
      label: 'measured in',
      hint: 'A share of the frequency makes high bands wider than low ones; hertz make all equally wide.',
      initial: 'share',
      options: [
        { value: 'share', label: 'share of frequency' },
        { value: 'Hz', label: 'Hz' },
      ],
    },
  ],
  sharper: 'a wider band',
  shorter: 'take a narrower band, whose lower edge is higher',
  refuse({ halfWidth }, frequenciesHz, rateHz) {
    const round = (value: number) => Number(value.toPrecision(4));
    const [lowest] = frequenciesHz;
    if (halfWidthHz(halfWidth, lowest) >= lowest * (1 - 1e-9)) {
      throw new PlanError(
        'phase.halfWidth.value',
        `A band of ${round(lowest)} Hz ± ${halfWidth.value} Hz would begin at or below 0 Hz: take a narrower band, or raise the lowest frequency.`,
      );
    }
    const highest = frequenciesHz[frequenciesHz.length - 1];
    const edge = highest + halfWidthHz(halfWidth, highest);
    if (edge < rateHz / 2) return;
    throw new PlanError(
      'phase.halfWidth.value',
      `The band around ${round(highest)} Hz ends at ${round(edge)} Hz, not below half the sampling rate (${round(rateHz / 2)} Hz): take a narrower band, or lower the highest frequency.`,
    );
  },
  caution({ halfWidth }, [lowest]) {
    const share = halfWidthHz(halfWidth, lowest) / lowest;
    if (share <= wideShare) return null;
    return `The band around ${Number(lowest.toPrecision(3))} Hz reaches ${Math.round(100 * share)} % to either side: its phase belongs to no one frequency, and a lag in ms means little.`;
  },
  widths: (settings, frequenciesHz, rateHz) =>
    frequenciesHz.map((hz) => widthOf(settings, hz, rateHz)),
  shapes: (settings, frequenciesHz) =>
    frequenciesHz.map((hz): KernelShape => {
      const half = halfWidthHz(settings.halfWidth, hz);
      const reachS = 1.5 / (hz - half);
      return (t) => bandEnvelope(t, half, reachS) * Math.cos(2 * Math.PI * hz * t);
    }),
  analyser(settings, frequenciesHz, rateHz, geometry) {
    const filters = frequenciesHz.map((hz) => bandPass(bandAt(settings, hz, rateHz), rateHz));
    return analyticAnalyser(filters, geometry);
  },
};
