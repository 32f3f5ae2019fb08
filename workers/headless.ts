import type { Plan, RecordingSource } from './engine';
import { engineApi } from './engine-api';
import type { KnownRecording } from './protocol';
import type { TaskPool } from './run/pool';
import { wholeRun, type WholeRun } from './run/whole-run';

/**
 * A whole run without a browser: the same steps of the same engine as a pool of workers takes, one
 * after the other in this thread, so the digest is the same too.
 */

export interface HeadlessOptions {
  /** Pairs in a block; the outcome does not depend on it. */
  pairsPerBlock?: number;
  onProgress?: (pairsDone: number, pairCount: number) => void;
}

export interface HeadlessResult extends Omit<WholeRun, 'phases'> {
  /** Phase angles of the kept epochs, [site][epoch][frequency][time], 256 to the turn. */
  phases: Uint8Array;
}

/**
 * Runs a plan over its recordings.
 * @throws PlanError when the plan does not fit them; RangeError or EdfError naming what is wrong
 */
export async function runHeadless(
  plan: Plan,
  recordings: RecordingSource[],
  { pairsPerBlock, onProgress }: HeadlessOptions = {},
): Promise<HeadlessResult> {
  const api = engineApi(({ source }: RecordingSource) => source);
  const pool: TaskPool<RecordingSource> = { size: 1, run: (task) => task(api, 0) };
  return withPhaseBytes(
    pool,
    plan,
    await wholeRun(pool, plan, recordings, {
      ...(pairsPerBlock && { pairsPerBlock }),
      onProgress(stage, done, of) {
        if (stage === 'pairs' && done > 0) onProgress?.(done, of);
      },
    }),
  );
}

/** The run with what the server keeps of its phases. */
export async function withPhaseBytes<Recording extends KnownRecording>(
  pool: TaskPool<Recording>,
  plan: Plan,
  run: WholeRun,
): Promise<HeadlessResult> {
  const phases = await pool.run((api) => api.phaseBytes(plan, run.axes, run.phases));
  return { ...run, phases };
}
