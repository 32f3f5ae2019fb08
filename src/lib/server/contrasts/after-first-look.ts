import { planChanges, type PlanChange } from '$lib/model/plan-changes';
import type { Member } from '../access';
import { notFound } from '../access/not-found';
import type { Db } from '../database';
import { readLockedBody } from './plan-body';

export interface AfterFirstLook {
  /** The version whose result was seen before this one was locked. */
  seenVersion: number;
  seenAt: Date;
  reason: string | null;
  changes: PlanChange[];
}

/**
 * Which choices of a locked plan came after the first look: its differences from the version whose
 * run finished first, if that was before this version was locked. Null for a plan made unseen.
 */
export async function changesAfterFirstLook(
  db: Db,
  member: Member,
  planId: string,
): Promise<AfterFirstLook | null> {
  const plan = await db
    .selectFrom('plan')
    .select(['contrastId', 'version', 'body', 'lockedAt', 'reason'])
    .where('teamId', '=', member.teamId)
    .where('id', '=', planId)
    .executeTakeFirst();
  if (!plan?.lockedAt) notFound('locked plan');
  const seen = await db
    .selectFrom('run')
    .innerJoin('plan', 'plan.id', 'run.planId')
    .select(['plan.version', 'plan.body', 'run.finishedAt'])
    .where('run.teamId', '=', member.teamId)
    .where('plan.contrastId', '=', plan.contrastId)
    .where('plan.version', '<', plan.version)
    .where('run.finishedAt', '<', plan.lockedAt)
    .orderBy('run.finishedAt')
    .limit(1)
    .executeTakeFirst();
  if (!seen?.finishedAt) return null;
  return {
    seenVersion: seen.version,
    seenAt: seen.finishedAt,
    reason: plan.reason,
    changes: planChanges(readLockedBody(seen.body), readLockedBody(plan.body)),
  };
}
