import { fail, redirect } from '@sveltejs/kit';
import { setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { studySchema } from '$lib/model/study';
import { allow, may } from '$lib/server/access';
import { db } from '$lib/server/database';
import { createStudy, listStudies, studySorts } from '$lib/server/studies';

export async function load(event) {
  const member = allow(event, 'study.read');
  const parameters = event.url.searchParams;
  const search = parameters.get('q')?.trim().slice(0, 120) ?? '';
  const sort = studySorts.find((one) => one === parameters.get('sort')) ?? 'newest';
  const [studies, form] = await Promise.all([
    listStudies(db, member.teamId, { search, sort }),
    superValidate(zod4(studySchema)),
  ]);
  const mayWrite = may(member.role, 'study.write');
  return {
    meta: { title: 'Studies' },
    studies,
    search,
    sort,
    form,
    mayWrite,
    isCreating: mayWrite && parameters.has('new'),
  };
}

export const actions = {
  create: async (event) => {
    const member = allow(event, 'study.write');
    const form = await superValidate(event.request, zod4(studySchema));
    if (!form.valid) return fail(400, { form });
    const saved = await createStudy(db, member, form.data);
    if (!saved.ok) return setError(form, saved.field, saved.message);
    redirect(303, `/studies/${saved.id}`);
  },
};
