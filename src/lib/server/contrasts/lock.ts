import { planHash, planSchema, type Plan } from '$engine';
import { checkPlan } from '$lib/model/plan-check';
import type { PlanDraft } from '$lib/model/plan-draft';
import type { PlanIssue } from '$lib/model/plan-issues';
import { draftToPlan } from '$lib/model/plan-parse';
import type { Member } from '../access';
import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Db } from '../database';
import { readDraftBody } from './plan-body';
import { participantRecordings } from './study-recordings';

export type Locked =
  | { state: 'locked'; hash: string }
  /** Somebody saved or locked after the person who locks read it. */
  | { state: 'newer' }
  | { state: 'wrong'; issues: PlanIssue[] };

/** The whole plan, or what is wrong with it when held against the recordings in the database. */
async function planOf(
  db: Db,
  member: Member,
  studyId: string,
  draft: PlanDraft,
): Promise<{ plan: Plan } | { issues: PlanIssue[] }> {
  // Held until the plan is locked: nobody may delete one of them, move it to another participant
  // or change its events between the check and the lock.
  await db
    .selectFrom('recording')
    .select('id')
    .where('teamId', '=', member.teamId)
    .where('studyId', '=', studyId)
    .forShare()
    .execute();
  const recordings = await participantRecordings(db, member, studyId, draft.participant);
  const names = new Map(recordings.map((each) => [each.sha256, each.name]));
  const parsed = draftToPlan(draft, names);
  if (!parsed.plan) return { issues: parsed.issues };
  const { issues } = checkPlan(parsed.plan, recordings);
  return issues.length > 0 ? { issues } : { plan: planSchema.parse(parsed.plan) };
}

/**
 * Makes a draft final: checked against the recordings, hashed, and from then on immutable, which
 * the database enforces too. A version after the first needs a reason.
 */
export async function lockPlan(
  db: Db,
  member: Member,
  contrastId: string,
  input: { version: number; revision: number; reason: string },
): Promise<Locked> {
  const reason = input.reason.trim();
  if (input.version > 1 && reason === '') {
    const message = 'Say why this version replaces the one before it: the reason stays with it.';
    return { state: 'wrong', issues: [{ field: 'reason', message }] };
  }
  return db.transaction().execute(async (trx) => {
    const row = await trx
      .selectFrom('plan')
      .innerJoin('contrast', 'contrast.id', 'plan.contrastId')
      .select(['plan.id', 'plan.body', 'plan.revision', 'plan.lockedAt', 'contrast.studyId'])
      .where('plan.teamId', '=', member.teamId)
      .where('plan.contrastId', '=', contrastId)
      .where('plan.version', '=', input.version)
      .forUpdate('plan')
      .executeTakeFirst();
    if (!row) notFound('plan version');
    if (row.lockedAt || row.revision !== input.revision) return { state: 'newer' };
    const checked = await planOf(trx, member, row.studyId, readDraftBody(row.body));
    if ('issues' in checked) return { state: 'wrong', issues: checked.issues };
    const hash = await planHash(checked.plan);
    await trx
      .updateTable('plan')
      .set({
        body: JSON.stringify(checked.plan),
        hash,
        reason: input.version > 1 ? reason : null,
        lockedAt: new Date(),
        lockedBy: member.personId,
      })
      .where('teamId', '=', member.teamId)
      .where('id', '=', row.id)
      .execute();
    const subject = { type: 'contrast', id: contrastId };
    const detail = { version: input.version, hash, ...(reason && { reason }) };
    await record(trx, member, 'plan.locked', subject, detail);
    return { state: 'locked', hash };
  });
}
