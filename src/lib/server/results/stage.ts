import type { Member } from '../access';
import { notFound } from '../access/not-found';
import type { Db, RunState } from '../database';

/** How far a contrast has come, for the page that has no result to show yet. */
export interface ContrastStage {
  name: string;
  newestPlan: { version: number; locked: boolean } | null;
  newestRun: { planVersion: number; state: RunState; progress: number } | null;
}

export async function contrastStage(
  db: Db,
  member: Member,
  contrastId: string,
): Promise<ContrastStage> {
  const [contrast, plan, run] = await Promise.all([
    db
      .selectFrom('contrast')
      .select('name')
      .where('teamId', '=', member.teamId)
      .where('id', '=', contrastId)
      .executeTakeFirst(),
    db
      .selectFrom('plan')
      .select(['version', 'lockedAt'])
      .where('teamId', '=', member.teamId)
      .where('contrastId', '=', contrastId)
      .orderBy('version', 'desc')
      .executeTakeFirst(),
    db
      .selectFrom('run')
      .innerJoin('plan', 'plan.id', 'run.planId')
      .select(['plan.version as planVersion', 'run.state', 'run.progress'])
      .where('run.teamId', '=', member.teamId)
      .where('plan.contrastId', '=', contrastId)
      .orderBy('plan.version', 'desc')
      .orderBy('run.startedAt', 'desc')
      .executeTakeFirst(),
  ]);
  if (!contrast) notFound('contrast');
  return {
    name: contrast.name,
    newestPlan: plan ? { version: plan.version, locked: plan.lockedAt !== null } : null,
    newestRun: run ?? null,
  };
}
