import type { Plan } from '../plan';
import type { Epoch } from '../types';
import { nullModelOf } from './registry';

/**
 * For each kept epoch, in their order, the block within which its label may be exchanged; undefined
 * where the plan's null has no blocks.
 */
export function epochBlocks(
  plan: Plan,
  epochs: Pick<Epoch, 'recording' | 'onsetS'>[],
): number[] | undefined {
  return nullModelOf(plan.null).blocksOf?.(epochs, plan.nullSettings ?? {});
}
