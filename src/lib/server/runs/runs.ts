import { error } from '@sveltejs/kit';
import { engineVersion } from '$engine';
import type { NewRun, RunChange, RunState } from '$lib/model/run';
import type { Member } from '../access';
import { notFound } from '../access/not-found';
import { record } from '../audit';
import { readLockedBody } from '../contrasts/plan-body';
import type { Db } from '../database';

const columns = [
  'run.id',
  'run.planId',
  'run.state',
  'run.progress',
  'run.seed',
  'run.engineVersion',
  'run.workerCount',
  'run.digest',
  'run.failure',
  'run.startedBy',
  'run.startedAt',
  'run.heardAt',
  'run.finishedAt',
] as const;

const runsOf = (db: Db, teamId: string) =>
  db
    .selectFrom('run')
    .innerJoin('plan', 'plan.id', 'run.planId')
    .innerJoin('person', 'person.id', 'run.startedBy')
    .select(columns)
    .select(['plan.version as planVersion', 'plan.hash as planHash', 'plan.contrastId'])
    .select('person.name as startedByName')
    .where('run.teamId', '=', teamId);

export type Run = Awaited<ReturnType<ReturnType<typeof runsOf>['execute']>>[number];

/** A contrast's runs over all its plans, the newest first. */
export function listRuns(db: Db, teamId: string, contrastId: string): Promise<Run[]> {
  return runsOf(db, teamId)
    .where('plan.contrastId', '=', contrastId)
    .orderBy('run.startedAt', 'desc')
    .execute();
}

/** Throws 404 for a run that is not the team's. */
export async function getRun(db: Db, teamId: string, runId: string): Promise<Run> {
  const run = await runsOf(db, teamId).where('run.id', '=', runId).executeTakeFirst();
  if (!run) notFound('run');
  return run;
}

/** Starts a run of the locked plan that the page shows. */
export async function createRun(
  db: Db,
  member: Member,
  contrastId: string,
  asked: NewRun,
): Promise<{ id: string }> {
  const plan = await db
    .selectFrom('plan')
    .select(['id', 'body'])
    .where('teamId', '=', member.teamId)
    .where('contrastId', '=', contrastId)
    .where('hash', '=', asked.planHash)
    .executeTakeFirst();
  if (!plan) notFound('locked plan');
  if (asked.engineVersion !== engineVersion) refuseEngine(asked.engineVersion);
  return db.transaction().execute(async (trx) => {
    const run = await trx
      .insertInto('run')
      .values({
        teamId: member.teamId,
        planId: plan.id,
        state: 'running',
        seed: readLockedBody(plan.body).test.seed,
        engineVersion,
        workerCount: asked.workerCount,
        startedBy: member.personId,
      })
      .returning('id')
      .executeTakeFirstOrThrow();
    await record(trx, member, 'run.started', { type: 'run', id: run.id }, { contrastId });
    return run;
  });
}

function refuseEngine(theirs: string): never {
  error(409, {
    code: 'engine-changed',
    message: `This page holds engine ${theirs}, the server ${engineVersion}. Reload the page.`,
  });
}

/** From which states a run may be set to each; a failed run may be taken up again. */
const allowedFrom: Record<Exclude<RunState, 'finished'>, RunState[]> = {
  running: ['running', 'paused', 'failed'],
  paused: ['running', 'paused'],
  stopped: ['running', 'paused', 'failed', 'stopped'],
  failed: ['running', 'paused', 'failed'],
};

/**
 * Takes a browser's word on how far its run is. Only who started it may report on it; anybody
 * who may run may stop one, so that a forgotten run does not stay open.
 */
export async function changeRun(
  db: Db,
  member: Member,
  runId: string,
  change: RunChange,
): Promise<void> {
  await db.transaction().execute(async (trx) => {
    const run = await trx
      .selectFrom('run')
      .select(['state', 'startedBy'])
      .where('teamId', '=', member.teamId)
      .where('id', '=', runId)
      .forUpdate()
      .executeTakeFirst();
    if (!run) notFound('run');
    if (change.state !== 'stopped') requireStarter(member, run.startedBy);
    if (run.state === 'finished' || run.state === 'stopped') refuseOver(run.state);
    if (change.state && !allowedFrom[change.state].includes(run.state)) {
      error(409, {
        code: 'run-state',
        message: `A run that is ${run.state} cannot become ${change.state}.`,
      });
    }
    const failure = change.state === 'failed' ? (change.failure ?? 'No reason was given.') : null;
    await trx
      .updateTable('run')
      .set({
        ...(change.state && { state: change.state, failure }),
        ...(change.progress !== undefined && { progress: change.progress }),
        ...(change.workerCount !== undefined && { workerCount: change.workerCount }),
        heardAt: new Date(),
      })
      .where('teamId', '=', member.teamId)
      .where('id', '=', runId)
      .execute();
    if (change.state && change.state !== run.state) {
      const detail = failure ? { failure } : {};
      await record(trx, member, `run.${change.state}`, { type: 'run', id: runId }, detail);
    }
  });
}

/** Maps and results come from the browser that computes, which is its starter's. */
export function requireStarter(member: Member, startedBy: string): void {
  if (startedBy !== member.personId) {
    error(403, { code: 'not-yours', message: 'Only who started a run may report on it.' });
  }
}

export function refuseOver(state: RunState): never {
  error(409, { code: 'run-over', message: `This run is ${state}; it takes nothing more.` });
}
