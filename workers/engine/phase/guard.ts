import type { Plan } from '../plan';
import { phaseMethod } from './registry';

/** Samples on both sides of the window that protect its edges: the longest kernel's half-length. */
export function guardSamples(
  phase: Plan['phase'],
  frequenciesHz: number[],
  rateHz: number,
): number {
  const widths = phaseMethod(phase.method).widths(phase, frequenciesHz, rateHz);
  return Math.max(...widths.map((width) => width.halfLength));
}
