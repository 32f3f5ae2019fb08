import { planSchema, type Plan } from '$engine';
import { planDraftSchema, planToDraft, type PlanDraft } from '$lib/model/plan-draft';

/** The form's state of a draft row, whether the form or a whole plan was stored. */
export function readDraftBody(body: unknown): PlanDraft {
  const draft = planDraftSchema.safeParse(body);
  return draft.success ? draft.data : planToDraft(planSchema.parse(body));
}

/** A locked body satisfies the schema; anything else is damage and must not pass silently. */
export function readLockedBody(body: unknown): Plan {
  return planSchema.parse(body);
}
