import { planSchema } from '$engine';
import type { ResultPlan, ResultRun } from '$lib/model/result';
import type { RunFacts } from '$lib/model/run-facts';
import type { Member } from '../access';
import { notFound } from '../access/not-found';
import type { Db } from '../database';

export interface FoundRun {
  run: ResultRun;
  plan: ResultPlan;
  facts: RunFacts;
  contrast: { id: string; name: string; studyId: string; simulated: boolean };
}

/** A finished run of the contrast, for the list of those that can be shown. */
export interface FinishedRun {
  id: string;
  planVersion: number;
  finishedAt: Date;
}

/** The contrast's finished runs, the newest run of the newest plan first. */
export async function finishedRuns(
  db: Db,
  member: Member,
  contrastId: string,
): Promise<FinishedRun[]> {
  const rows = await db
    .selectFrom('run')
    .innerJoin('plan', 'plan.id', 'run.planId')
    .select(['run.id', 'plan.version as planVersion', 'run.finishedAt'])
    .where('run.teamId', '=', member.teamId)
    .where('plan.contrastId', '=', contrastId)
    .where('run.state', '=', 'finished')
    .orderBy('plan.version', 'desc')
    .orderBy('run.finishedAt', 'desc')
    .execute();
  return rows.map((row) => ({ ...row, finishedAt: row.finishedAt! }));
}

/** A finished run with its plan. Throws a 404 where the team has no such finished run. */
export async function findFinishedRun(db: Db, member: Member, runId: string): Promise<FoundRun> {
  const row = await db
    .selectFrom('run')
    .innerJoin('plan', 'plan.id', 'run.planId')
    .innerJoin('contrast', 'contrast.id', 'plan.contrastId')
    .innerJoin('study', 'study.id', 'contrast.studyId')
    .innerJoin('person as starter', 'starter.id', 'run.startedBy')
    .leftJoin('person as locker', 'locker.id', 'plan.lockedBy')
    .select([
      'run.id',
      'run.seed',
      'run.engineVersion',
      'run.digest',
      'run.workerCount',
      'run.facts',
      'run.finishedAt',
      'starter.name as startedBy',
      'plan.id as planId',
      'plan.version',
      'plan.hash',
      'plan.reason',
      'plan.lockedAt',
      'locker.name as lockedBy',
      'plan.body',
      'contrast.id as contrastId',
      'contrast.name as contrastName',
      'contrast.studyId',
      'study.simulated',
    ])
    .where('run.teamId', '=', member.teamId)
    .where('run.id', '=', runId)
    .where('run.state', '=', 'finished')
    .executeTakeFirst();
  if (!row) notFound('finished run');
  // A finished run's facts were written by this server, whole, when it finished.
  const facts = row.facts as unknown as RunFacts;
  return {
    run: {
      id: row.id,
      seed: row.seed,
      engineVersion: row.engineVersion,
      digest: row.digest!,
      workerCount: row.workerCount,
      startedBy: row.startedBy,
      finishedAt: row.finishedAt!,
      epochsA: facts.keptA,
      epochsB: facts.keptB,
      lostEpochs: facts.lostCount,
      smallestDifference: facts.smallestDifference,
    },
    plan: {
      id: row.planId,
      version: row.version,
      hash: row.hash!,
      reason: row.reason,
      lockedAt: row.lockedAt!,
      lockedBy: row.lockedBy ?? '',
      body: planSchema.parse(row.body),
    },
    facts,
    contrast: {
      id: row.contrastId,
      name: row.contrastName,
      studyId: row.studyId,
      simulated: row.simulated,
    },
  };
}
