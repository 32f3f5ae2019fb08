import { error, fail, redirect } from '@sveltejs/kit';
import { setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { z } from 'zod';
import { chooseVersion } from '$lib/model/stages';
import { allow, may } from '$lib/server/access';
import {
  discardDraft,
  getContrast,
  lockPlan,
  newVersion,
  participantRecordings,
  participantsWithRecordings,
  planPage,
  renameContrast,
} from '$lib/server/contrasts';
import { db } from '$lib/server/database';

const renameSchema = z.object({
  name: z
    .string()
    .trim()
    .min(1, 'Give the contrast a name.')
    .max(120, 'Use at most 120 characters.'),
});
const lockSchema = z.object({
  version: z.coerce.number().int().min(1),
  revision: z.coerce.number().int().min(0),
  reason: z.string().max(2000).default(''),
});
const versionSchema = z.object({ fromVersion: z.coerce.number().int().min(1) });

export async function load(event) {
  const member = allow(event, 'contrast.read');
  const { contrast, askedVersion } = await event.parent();
  const chosen = chooseVersion(contrast.plans, 'define', askedVersion);
  if (!chosen) error(404, { code: 'not-found', message: 'This contrast has no plan.' });
  const page = await planPage(db, member, contrast, chosen.version);
  const [recordings, participants, renameForm] = await Promise.all([
    participantRecordings(db, member, contrast.studyId, page.participant),
    participantsWithRecordings(db, member, contrast.studyId),
    superValidate({ name: contrast.name }, zod4(renameSchema)),
  ]);
  return {
    ...page,
    chosen,
    recordings,
    participants,
    renameForm,
    mayDownload: may(member.role, 'recording.download'),
    meta: { title: `${contrast.name}: define` },
  };
}

export const actions = {
  lock: async (event) => {
    const member = allow(event, 'plan.lock');
    const input = lockSchema.safeParse(Object.fromEntries(await event.request.formData()));
    if (!input.success) return fail(400, { message: 'The form was incomplete. Try again.' });
    const locked = await lockPlan(db, member, event.params.contrastId, input.data);
    if (locked.state === 'wrong') return fail(400, { issues: locked.issues });
    if (locked.state === 'newer') {
      const message =
        'The draft was saved or locked by someone else meanwhile. Reload and look again.';
      return fail(409, { message });
    }
    return { hash: locked.hash };
  },
  newVersion: async (event) => {
    const member = allow(event, 'contrast.write');
    const input = versionSchema.safeParse(Object.fromEntries(await event.request.formData()));
    if (!input.success) return fail(400, { message: 'Choose the version to begin from.' });
    const { contrastId } = event.params;
    const { version } = await newVersion(db, member, contrastId, input.data.fromVersion);
    redirect(303, `/contrasts/${contrastId}/define?plan=${version}`);
  },
  discard: async (event) => {
    const member = allow(event, 'contrast.write');
    const { contrastId } = event.params;
    const { studyId } = await getContrast(db, member, contrastId);
    const { contrastRemoved } = await discardDraft(db, member, contrastId);
    redirect(303, contrastRemoved ? `/studies/${studyId}` : `/contrasts/${contrastId}/define`);
  },
  rename: async (event) => {
    const member = allow(event, 'contrast.write');
    const form = await superValidate(event.request, zod4(renameSchema));
    if (!form.valid) return fail(400, { renameForm: form });
    const renamed = await renameContrast(db, member, event.params.contrastId, form.data.name);
    if (!renamed.ok) {
      setError(form, 'name', renamed.message);
      return fail(400, { renameForm: form });
    }
    return { renameForm: form };
  },
};
