import { RunError } from './errors';

const nameOf = (planHash: string): string => `nullwright-run-${planHash}`;

/**
 * Does `work` while this tab alone in this browser computes the plan; two would only halve each
 * other's speed and mix their checkpoints. Browsers without Web Locks go unguarded.
 */
export async function holdRunLock(planHash: string, work: () => Promise<void>): Promise<void> {
  if (typeof navigator.locks === 'undefined') return work();
  await navigator.locks.request(nameOf(planHash), { ifAvailable: true }, async (lock) => {
    if (!lock) {
      throw new RunError('elsewhere', 'This plan is being run in another tab of this browser.');
    }
    await work();
  });
}

/** Is the plan being run in some tab of this browser? */
export async function isRunLocked(planHash: string): Promise<boolean> {
  if (typeof navigator.locks === 'undefined') return false;
  const { held = [] } = await navigator.locks.query();
  return held.some((lock) => lock.name === nameOf(planHash));
}
