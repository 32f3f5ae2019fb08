import type { Plan } from '../plan';
import type { NullPart } from './part';
import { correctionOf, type CorrectionId } from './registry';

/** The parts that a plan's corrections need, by the correction's id. */
export function planParts(test: Pick<Plan['test'], 'corrections'>): [CorrectionId, NullPart][] {
  return test.corrections.flatMap((id) => {
    const { part } = correctionOf(id);
    return part ? [[id, part] as [CorrectionId, NullPart]] : [];
  });
}
