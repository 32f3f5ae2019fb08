import type { PhaseMethod, PhaseSettings } from './method';
import { morlet } from './morlet';

/** In the order the form shows them. */
export const phaseMethods: readonly PhaseMethod[] = [morlet];

export function phaseMethod(id: PhaseSettings['method']): PhaseMethod {
  const found = phaseMethods.find((method) => method.id === id);
  if (!found) throw new RangeError(`phase method "${id}" is not registered`);
  return found;
}
