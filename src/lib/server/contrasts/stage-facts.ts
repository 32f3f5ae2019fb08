import { readLockedBody } from './plan-body';
import type { Member } from '../access';
import type { Db, RunState } from '../database';

export interface RunFacts {
  state: RunState;
  progress: number;
  /** Wall-clock seconds of a finished run. */
  durationS: number | null;
  /** Claims under the correction that carries the plan's claim, when finished. */
  edgeCount: number;
  clusterCount: number;
}

export interface StageFacts {
  version: number;
  permutations: number;
  /** The newest run, a finished one before any other. */
  run: RunFacts | null;
}

/** What each locked version of a contrast has come to: the facts below Run and Result. */
export async function stageFacts(
  db: Db,
  member: Member,
  contrastId: string,
): Promise<StageFacts[]> {
  const plans = await db
    .selectFrom('plan')
    .select(['id', 'version', 'body'])
    .where('teamId', '=', member.teamId)
    .where('contrastId', '=', contrastId)
    .where('lockedAt', 'is not', null)
    .orderBy('version')
    .execute();
  if (plans.length === 0) return [];
  const runs = await db
    .selectFrom('run')
    .select(['id', 'planId', 'state', 'progress', 'startedAt', 'finishedAt'])
    .where('teamId', '=', member.teamId)
    .where(
      'planId',
      'in',
      plans.map((plan) => plan.id),
    )
    .orderBy('finishedAt', (ob) => ob.desc().nullsLast())
    .orderBy('startedAt', 'desc')
    .execute();
  return Promise.all(
    plans.map(async ({ id, version, body }) => {
      const { permutations, corrections } = readLockedBody(body).test;
      const run = runs.find((each) => each.planId === id);
      if (!run) return { version, permutations, run: null };
      const claims = await claimCounts(db, member, run.id, corrections[0]);
      const { state, progress, startedAt, finishedAt } = run;
      const durationS = finishedAt && (finishedAt.getTime() - startedAt.getTime()) / 1000;
      return { version, permutations, run: { state, progress, durationS, ...claims } };
    }),
  );
}

function claimCounts(db: Db, member: Member, runId: string, correction: string) {
  return db
    .selectFrom('edge')
    .select((eb) => [
      eb.fn.countAll<number>().as('edgeCount'),
      eb.fn.count<number>('clusterId').distinct().as('clusterCount'),
    ])
    .where('teamId', '=', member.teamId)
    .where('runId', '=', runId)
    .where('correction', '=', correction)
    .executeTakeFirstOrThrow();
}
