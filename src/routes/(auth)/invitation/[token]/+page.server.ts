import { fail, redirect } from '@sveltejs/kit';
import { setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { joinSchema } from '$lib/model/account';
import { chooseTeam, startSession } from '$lib/server/accounts';
import { db } from '$lib/server/database';
import { acceptAsNew, acceptAsPerson, findInvitation } from '$lib/server/invitations';

export async function load({ params, locals, url }) {
  const found = await findInvitation(db, params.token);
  return {
    meta: { title: 'Invitation' },
    form: await superValidate(zod4(joinSchema)),
    invitation: found && {
      email: found.email,
      role: found.role,
      teamName: found.teamName,
      inviterName: found.inviterName,
      hasAccount: found.personId !== null,
    },
    signedInAs: locals.person?.email ?? null,
    signInHref: `/sign-in?next=${encodeURIComponent(url.pathname)}`,
  };
}

export const actions = {
  /** For somebody without an account. */
  create: async ({ request, params, cookies }) => {
    const form = await superValidate(request, zod4(joinSchema));
    const { name, password } = form.data;
    form.data.password = '';
    if (!form.valid) return fail(400, { form });
    const outcome = await acceptAsNew(db, params.token, { name, password });
    if (!outcome.ok) return setError(form, outcome.field as '' | 'password', outcome.message);
    await startSession(cookies, outcome.personId);
    chooseTeam(cookies, outcome.teamId);
    redirect(303, '/studies');
  },

  /** For the signed-in owner of the invited address. */
  join: async ({ params, cookies, locals, url }) => {
    if (!locals.person) redirect(303, `/sign-in?next=${encodeURIComponent(url.pathname)}`);
    const outcome = await acceptAsPerson(db, params.token, locals.person);
    if (!outcome.ok) return fail(400, { problem: outcome.message });
    chooseTeam(cookies, outcome.teamId);
    redirect(303, '/studies');
  },
};
