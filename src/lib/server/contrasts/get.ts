import type { Plan } from '$engine';
import type { PlanDraft } from '$lib/model/plan-draft';
import type { Member } from '../access';
import type { Db } from '../database';
import { notFound } from '../access/not-found';
import { readDraftBody, readLockedBody } from './plan-body';

export interface PlanVersion {
  id: string;
  version: number;
  /** Null while it is a draft. */
  hash: string | null;
  lockedAt: Date | null;
  lockedByName: string | null;
  /** Why it replaces the version before it. */
  reason: string | null;
}

export interface ContrastFacts {
  id: string;
  name: string;
  studyId: string;
  studyName: string;
  /** Study or team holds simulated data only. */
  simulated: boolean;
  /** Oldest first. */
  plans: PlanVersion[];
}

/** A contrast with its plan versions; 404 when it is none of the member's team. */
export async function getContrast(
  db: Db,
  member: Member,
  contrastId: string,
): Promise<ContrastFacts> {
  const contrast = await db
    .selectFrom('contrast')
    .innerJoin('study', 'study.id', 'contrast.studyId')
    .select([
      'contrast.id',
      'contrast.name',
      'study.id as studyId',
      'study.name as studyName',
      'study.simulated as simulated',
    ])
    .where('contrast.teamId', '=', member.teamId)
    .where('contrast.id', '=', contrastId)
    .executeTakeFirst();
  if (!contrast) notFound('contrast');
  const plans = await db
    .selectFrom('plan')
    .leftJoin('person', 'person.id', 'plan.lockedBy')
    .select([
      'plan.id',
      'plan.version',
      'plan.hash',
      'plan.lockedAt',
      'plan.reason',
      'person.name as lockedByName',
    ])
    .where('plan.teamId', '=', member.teamId)
    .where('plan.contrastId', '=', contrastId)
    .orderBy('plan.version')
    .execute();
  return { ...contrast, plans };
}

export type PlanBody =
  | { state: 'draft'; draft: PlanDraft; revision: number; savedAt: Date; savedByName: string }
  | { state: 'locked'; plan: Plan };

/** One version's body: the form's state of a draft, or the locked plan. */
export async function getPlanBody(
  db: Db,
  member: Member,
  contrastId: string,
  version: number,
): Promise<PlanBody> {
  const row = await db
    .selectFrom('plan')
    .innerJoin('person', (join) =>
      join.on((eb) => eb('person.id', '=', eb.fn.coalesce('plan.updatedBy', 'plan.createdBy'))),
    )
    .select(['plan.body', 'plan.lockedAt', 'plan.revision', 'plan.updatedAt', 'person.name'])
    .where('plan.teamId', '=', member.teamId)
    .where('plan.contrastId', '=', contrastId)
    .where('plan.version', '=', version)
    .executeTakeFirst();
  if (!row) notFound('plan version');
  if (row.lockedAt) return { state: 'locked', plan: readLockedBody(row.body) };
  return {
    state: 'draft',
    draft: readDraftBody(row.body),
    revision: row.revision,
    savedAt: row.updatedAt,
    savedByName: row.name,
  };
}
