import { ispc } from './ispc';

/** In the order the form shows them. */
export const measures = [ispc] as const;

export type MeasureId = (typeof measures)[number]['id'];

/** Ids in the order the form shows them. */
export const measureIds = measures.map((measure) => measure.id) as [MeasureId, ...MeasureId[]];

/** @throws RangeError for an id that is not registered. */
export function measureOf(id: MeasureId): (typeof measures)[number] {
  const found = measures.find((measure) => measure.id === id);
  if (!found) throw new RangeError(`measure "${String(id)}" is not registered`);
  return found;
}
