import { fail, redirect } from '@sveltejs/kit';
import { setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { contrastSchema, participantSchema, studySchema } from '$lib/model/study';
import { allow, may } from '$lib/server/access';
import { createContrast } from '$lib/server/contrasts';
import { db } from '$lib/server/database';
import { storage } from '$lib/server/storage';
import {
  addParticipants,
  getStudy,
  listParticipants,
  lockedContrasts,
  removeParticipant,
  removeStudy,
  studyContrasts,
  updateStudy,
} from '$lib/server/studies';

const panels = ['contrast', 'edit', 'delete'] as const;

export async function load(event) {
  const member = allow(event, 'study.read');
  const { studyId } = event.params;
  const study = await getStudy(db, member.teamId, studyId);
  const [contrasts, participants, locked, contrastForm, studyForm, participantForm] =
    await Promise.all([
      studyContrasts(db, member.teamId, studyId),
      listParticipants(db, member.teamId, studyId),
      lockedContrasts(db, member.teamId, studyId),
      superValidate(zod4(contrastSchema), { id: 'contrast' }),
      superValidate(study, zod4(studySchema), { id: 'study' }),
      superValidate(zod4(participantSchema), { id: 'participant' }),
    ]);
  const mayWrite = may(member.role, 'study.write');
  const asked = panels.find((panel) => event.url.searchParams.has(panel));
  return {
    meta: { title: study.name },
    crumbs: [{ label: 'Studies', href: '/studies' }, { label: study.name }],
    study,
    contrasts,
    participants,
    lockedContrasts: locked,
    contrastForm,
    studyForm,
    participantForm,
    mayWrite,
    mayContrast: may(member.role, 'contrast.write'),
    panel: mayWrite ? (asked ?? null) : null,
  };
}

export const actions = {
  contrast: async (event) => {
    const member = allow(event, 'contrast.write');
    const form = await superValidate(event.request, zod4(contrastSchema), { id: 'contrast' });
    if (!form.valid) return fail(400, { form });
    const { studyId } = event.params;
    const made = await createContrast(db, member, { studyId, ...form.data });
    if (!made.ok) return setError(form, made.field, made.message);
    redirect(303, `/contrasts/${made.id}/define`);
  },

  edit: async (event) => {
    const member = allow(event, 'study.write');
    const form = await superValidate(event.request, zod4(studySchema), { id: 'study' });
    if (!form.valid) return fail(400, { form });
    const saved = await updateStudy(db, member, event.params.studyId, form.data);
    if (!saved.ok) return setError(form, saved.field, saved.message);
    redirect(303, `/studies/${saved.id}`);
  },

  delete: async (event) => {
    const member = allow(event, 'study.write');
    const removed = await removeStudy(db, storage, member, event.params.studyId);
    if (!removed.ok) return fail(409, { lockedContrasts: removed.lockedContrasts });
    redirect(303, '/studies');
  },

  addParticipant: async (event) => {
    const member = allow(event, 'study.write');
    const form = await superValidate(event.request, zod4(participantSchema), {
      id: 'participant',
    });
    if (!form.valid) return fail(400, { form });
    const added = await addParticipants(db, member, event.params.studyId, [form.data.code]);
    if (added === 0) {
      return setError(form, 'code', `This study already has a participant ${form.data.code}.`);
    }
    return { form };
  },

  removeParticipant: async (event) => {
    const member = allow(event, 'study.write');
    const id = (await event.request.formData()).get('id');
    if (typeof id !== 'string' || !/^[0-9a-f-]{36}$/.test(id)) {
      return fail(400, { participantMessage: 'Choose the participant to remove.' });
    }
    const removed = await removeParticipant(db, member, event.params.studyId, id);
    if (!removed.ok) return fail(409, { participantMessage: removed.message });
    return { removed: removed.code };
  },
};
