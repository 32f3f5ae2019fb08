import { planToDraft, type PlanDraft } from '$lib/model/plan-draft';
import type { Member } from '../access';
import { record } from '../audit';
import type { Db } from '../database';
import { getPlanBody } from './get';
import { notFound } from '../access/not-found';
import { readLockedBody } from './plan-body';

export type Saved =
  | { state: 'saved'; revision: number; savedAt: Date }
  /** Somebody saved after `basedOn`: theirs is handed back, and nothing was written. */
  | { state: 'newer'; revision: number; savedAt: Date; savedByName: string; draft: PlanDraft }
  | { state: 'locked' };

/** Saves a draft that was read at revision `basedOn`; a newer one is never overwritten. */
export async function saveDraft(
  db: Db,
  member: Member,
  contrastId: string,
  input: { version: number; basedOn: number; draft: PlanDraft },
): Promise<Saved> {
  const saved = await db
    .updateTable('plan')
    .set((eb) => ({
      body: JSON.stringify(input.draft),
      revision: eb('revision', '+', 1),
      updatedAt: new Date(),
      updatedBy: member.personId,
    }))
    .where('teamId', '=', member.teamId)
    .where('contrastId', '=', contrastId)
    .where('version', '=', input.version)
    .where('lockedAt', 'is', null)
    .where('revision', '=', input.basedOn)
    .returning(['revision', 'updatedAt'])
    .executeTakeFirst();
  if (saved) return { state: 'saved', revision: saved.revision, savedAt: saved.updatedAt };
  const now = await getPlanBody(db, member, contrastId, input.version);
  if (now.state === 'locked') return { state: 'locked' };
  const { revision, savedAt, savedByName, draft } = now;
  return { state: 'newer', revision, savedAt, savedByName, draft };
}

/** Begins the next version from a locked one, or finds the draft that is there already. */
export async function newVersion(
  db: Db,
  member: Member,
  contrastId: string,
  fromVersion: number,
): Promise<{ version: number; existed: boolean }> {
  return db.transaction().execute(async (trx) => {
    const contrast = await trx
      .selectFrom('contrast')
      .select('id')
      .where('teamId', '=', member.teamId)
      .where('id', '=', contrastId)
      .forUpdate()
      .executeTakeFirst();
    if (!contrast) notFound('contrast');
    const plans = await trx
      .selectFrom('plan')
      .select(['version', 'lockedAt', 'body'])
      .where('teamId', '=', member.teamId)
      .where('contrastId', '=', contrastId)
      .orderBy('version', 'desc')
      .execute();
    const draft = plans.find((plan) => plan.lockedAt === null);
    if (draft) return { version: draft.version, existed: true };
    const from = plans.find((plan) => plan.version === fromVersion);
    if (!from) notFound('plan version');
    const version = plans[0].version + 1;
    await trx
      .insertInto('plan')
      .values({
        teamId: member.teamId,
        contrastId,
        version,
        body: JSON.stringify(planToDraft(readLockedBody(from.body))),
        createdBy: member.personId,
      })
      .execute();
    const subject = { type: 'contrast', id: contrastId };
    await record(trx, member, 'plan.drafted', subject, { version, fromVersion });
    return { version, existed: false };
  });
}

/**
 * Throws a draft away. With the first draft nothing is left of a contrast, so it goes too.
 */
export async function discardDraft(
  db: Db,
  member: Member,
  contrastId: string,
): Promise<{ contrastRemoved: boolean }> {
  return db.transaction().execute(async (trx) => {
    const draft = await trx
      .deleteFrom('plan')
      .where('teamId', '=', member.teamId)
      .where('contrastId', '=', contrastId)
      .where('lockedAt', 'is', null)
      .returning('version')
      .executeTakeFirst();
    if (!draft) notFound('draft');
    const { version } = draft;
    const subject = { type: 'contrast', id: contrastId };
    await record(trx, member, 'plan.discarded', subject, { version });
    if (version > 1) return { contrastRemoved: false };
    const removed = await trx
      .deleteFrom('contrast')
      .where('teamId', '=', member.teamId)
      .where('id', '=', contrastId)
      .returning('name')
      .executeTakeFirstOrThrow();
    await record(trx, member, 'contrast.removed', subject, { name: removed.name });
    return { contrastRemoved: true };
  });
}
