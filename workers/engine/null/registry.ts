import { labels } from './labels';
import { labelsWithinBlocks } from './labels-within-blocks';
import { timeShift } from './time-shift';
import { trialOrder } from './trial-order';

/** In the order the form shows them. */
export const nullModels = [labels, labelsWithinBlocks, trialOrder, timeShift] as const;

export type NullId = (typeof nullModels)[number]['id'];

/** Ids in the order the form shows them. */
export const nullIds = nullModels.map((model) => model.id) as [NullId, ...NullId[]];

/** @throws RangeError for an id that is not registered. */
export function nullModelOf(id: NullId): (typeof nullModels)[number] {
  const found = nullModels.find((model) => model.id === id);
  if (!found) throw new RangeError(`null model "${String(id)}" is not registered`);
  return found;
}
