import { engineVersion } from '$engine';
import type { RunState } from '$lib/model/run';
import { Checkpoints } from './checkpoints';
import { isRunLocked } from './run-lock';

/** What the Run page can do about the newest run of its plan. */
export type Standing =
  | { kind: 'start' }
  | { kind: 'finished' }
  /** Begun in this browser and left: goes on by itself, or stays paused. */
  | { kind: 'take-up'; paused: boolean }
  /** Failed, and what was computed is still here. */
  | { kind: 'failed'; kept: boolean }
  | { kind: 'watch'; where: 'other-tab' | 'other-browser' | 'other-person' };

interface KnownRun {
  id: string;
  state: RunState;
  engineVersion: string;
  startedBy: string;
}

/** Looks at the run, this browser's locks and its checkpoints; changes nothing. */
export async function standingOf(
  run: KnownRun | null,
  me: { personId: string; mayRun: boolean },
  planHash: string,
): Promise<Standing> {
  if (!run || run.state === 'stopped') return { kind: 'start' };
  if (run.state === 'finished') return { kind: 'finished' };
  const mine = me.mayRun && run.startedBy === me.personId;
  if (mine && (await isRunLocked(planHash))) return { kind: 'watch', where: 'other-tab' };
  const kept = mine && run.engineVersion === engineVersion && (await hasCheckpoint(run.id));
  if (run.state === 'failed') return { kind: 'failed', kept };
  if (kept) return { kind: 'take-up', paused: run.state === 'paused' };
  return { kind: 'watch', where: mine ? 'other-browser' : 'other-person' };
}

async function hasCheckpoint(runId: string): Promise<boolean> {
  const checkpoints = await Checkpoints.open(() => undefined);
  try {
    return await checkpoints.has(runId);
  } finally {
    checkpoints.close();
  }
}
