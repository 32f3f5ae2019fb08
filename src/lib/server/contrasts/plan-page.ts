import type { Member } from '../access';
import { changesAfterFirstLook } from './after-first-look';
import { getPlanBody, type ContrastFacts, type PlanBody } from './get';
import type { Db } from '../database';

/** One version with the locked one before it, and what it says about choices made after a look. */
export async function planPage(db: Db, member: Member, contrast: ContrastFacts, version: number) {
  const chosen = contrast.plans.find((plan) => plan.version === version);
  const before = contrast.plans.filter((plan) => plan.version < version).at(-1);
  const [body, previous, afterFirstLook] = await Promise.all([
    getPlanBody(db, member, contrast.id, version),
    before ? getPlanBody(db, member, contrast.id, before.version) : null,
    chosen?.lockedAt ? changesAfterFirstLook(db, member, chosen.id) : null,
  ]);
  return {
    body: plain(body),
    participant: body.state === 'locked' ? body.plan.participant : body.draft.participant,
    // A draft's question is in its form.
    question: body.state === 'locked' ? body.plan.question : undefined,
    previous: previous?.state === 'locked' ? previous.plan : null,
    previousVersion: before?.version ?? null,
    afterFirstLook,
  };
}

function plain(body: PlanBody) {
  return body.state === 'locked' ? body : { ...body, savedAt: body.savedAt.toISOString() };
}
