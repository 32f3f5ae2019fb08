import { error, json } from '@sveltejs/kit';
import { z } from 'zod';
import { planDraftSchema } from '$lib/model/plan-draft';
import { allow } from '$lib/server/access';
import { saveDraft } from '$lib/server/contrasts';
import { db } from '$lib/server/database';

const saveSchema = z.strictObject({
  version: z.int().min(1),
  /** The revision that was edited. */
  basedOn: z.int().min(0),
  draft: planDraftSchema,
});

/** Saves the form's state; 409 with the newer draft when somebody else saved in between. */
export async function PUT(event) {
  const member = allow(event, 'contrast.write');
  const input = saveSchema.safeParse(await event.request.json().catch(() => null));
  if (!input.success) {
    const [issue] = input.error.issues;
    error(400, { code: 'bad-draft', message: `${issue.path.join('.')}: ${issue.message}` });
  }
  const saved = await saveDraft(db, member, event.params.contrastId, input.data);
  return json(saved, { status: saved.state === 'saved' ? 200 : 409 });
}
