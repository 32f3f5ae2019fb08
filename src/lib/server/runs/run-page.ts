import { isHttpError } from '@sveltejs/kit';
import { PlanError, type Plan, type RecordingFacts } from '$engine';
import type { Db } from '../database';
import { listRecordings } from '../recordings';
import { expectationOf, lockedPlan, type LockedPlan } from './context';
import { listRuns, type Run } from './runs';

export interface RunPage {
  plan: Plan;
  version: number;
  hash: string;
  /** Runs of this version, the newest first. */
  runs: Run[];
  /** What this run is made of; null where the plan cannot be run, `trouble` says why. */
  size: RunSize | null;
  trouble: string | null;
  /** For those who may run: what the engine needs. */
  work: { facts: RecordingFacts[]; files: RecordingFile[] } | null;
}

export interface RunSize {
  pairs: number;
  frequencies: number;
  times: number;
  plannedA: number;
  plannedB: number;
}

interface RecordingFile {
  id: string;
  sha256: string;
  name: string;
  sizeBytes: number;
}

/** All that the Run page shows of one locked version; null where none is locked. */
export async function runPage(
  db: Db,
  teamId: string,
  contrastId: string,
  asked: { version: number | null; mayRun: boolean },
): Promise<RunPage | null> {
  const locked =
    (await lockedPlan(db, teamId, contrastId, asked.version)) ??
    (await lockedPlan(db, teamId, contrastId));
  if (!locked) return null;
  const all = await listRuns(db, teamId, contrastId);
  const base = {
    plan: locked.plan,
    version: locked.version,
    hash: locked.hash,
    runs: all.filter((run) => run.planId === locked.id),
  };
  try {
    const { facts, axes, planned, lost } = await expectationOf(db, teamId, locked);
    const count = (condition: 'a' | 'b') =>
      [...planned, ...lost].filter((epoch) => epoch.condition === condition).length;
    const size: RunSize = {
      pairs: axes.pairs.length,
      frequencies: axes.frequenciesHz.length,
      times: axes.timesS.length,
      plannedA: count('a'),
      plannedB: count('b'),
    };
    const files = asked.mayRun ? await filesOf(db, teamId, locked) : [];
    return { ...base, size, trouble: null, work: asked.mayRun ? { facts, files } : null };
  } catch (thrown) {
    return { ...base, size: null, trouble: troubleOf(thrown), work: null };
  }
}

/** A plan that no longer fits its recordings is shown with the reason; other errors go on. */
function troubleOf(thrown: unknown): string {
  if (thrown instanceof PlanError) return thrown.message;
  if (isHttpError(thrown, 409)) return thrown.body.message;
  throw thrown;
}

async function filesOf(
  db: Db,
  teamId: string,
  { plan, studyId }: LockedPlan,
): Promise<RecordingFile[]> {
  const wanted = new Set(plan.recordings.map(({ sha256 }) => sha256));
  const listed = await listRecordings(db, teamId, studyId);
  return listed
    .filter(({ sha256 }) => wanted.has(sha256))
    .map(({ id, sha256, name, sizeBytes }) => ({ id, sha256, name, sizeBytes }));
}
