import { nullModelOf } from '../null/registry';
import type { Plan } from '../plan';

/** Whether the plan's null needs every sample of the window, or the plan's times only. */
export function keepsWholeWindow(plan: Plan): boolean {
  return nullModelOf(plan.null).needsWholeWindow;
}
