import { z } from 'zod';

/** More are refused: each costs memory and tests. */
export const mostFrequencies = 200;

const hz = z.number().positive('must be above 0 Hz');

/** The frequencies (of bands, their centres) at which any phase method looks. */
export const frequenciesSchema = z.discriminatedUnion('kind', [
  z.strictObject({
    kind: z.literal('grid'),
    fromHz: hz,
    toHz: hz,
    steps: z.int().min(1).max(mostFrequencies),
    spacing: z.enum(['log', 'linear']),
  }),
  z.strictObject({
    kind: z.literal('list'),
    hz: z.array(hz).min(1).max(mostFrequencies),
  }),
]);

export type FrequencyRule = z.infer<typeof frequenciesSchema>;
