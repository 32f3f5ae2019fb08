import { z } from 'zod';
import { filterHilbert } from './filter-hilbert';
import type { PhaseMethod } from './method';
import { morlet } from './morlet';
import { shortTimeFourier } from './short-time-fourier';

/** In the order the form shows them. */
export const phaseMethods = [morlet, shortTimeFourier, filterHilbert] as const;

type SchemasOf<Methods extends readonly { schema: unknown }[]> = {
  -readonly [I in keyof Methods]: Methods[I]['schema'];
};

/** The plan's `phase`: the settings of one registered method. */
export const phaseSchema = z.discriminatedUnion(
  'method',
  phaseMethods.map((method) => method.schema) as unknown as SchemasOf<typeof phaseMethods>,
);

export type PhaseSettings = z.infer<typeof phaseSchema>;
export type PhaseMethodId = PhaseSettings['method'];

/** Ids in the order the form shows them. */
export const phaseMethodIds = phaseMethods.map((method) => method.id) as [
  PhaseMethodId,
  ...PhaseMethodId[],
];

/** @throws RangeError for an id that is not registered. */
export function phaseMethod(id: PhaseMethodId): PhaseMethod {
  const found: PhaseMethod | undefined = phaseMethods.find((method) => method.id === id);
  if (!found) throw new RangeError(`phase method "${String(id)}" is not registered`);
  return found;
}
