import { fail, redirect } from '@sveltejs/kit';
import { setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { resetSchema } from '$lib/model/account';
import { endSession, findReset, resetPassword } from '$lib/server/accounts';
import { db } from '$lib/server/database';

export async function load({ params }) {
  const reset = await findReset(db, params.token);
  return {
    meta: { title: 'Set a new password' },
    form: await superValidate(zod4(resetSchema)),
    email: reset?.email ?? null,
  };
}

export const actions = {
  default: async ({ request, params, cookies, locals }) => {
    const form = await superValidate(request, zod4(resetSchema));
    const { password } = form.data;
    form.data.password = '';
    if (!form.valid) return fail(400, { form });
    const outcome = await resetPassword(db, params.token, password);
    if (!outcome.ok) return setError(form, outcome.field as '' | 'password', outcome.message);
    await endSession(cookies, locals.sessionId);
    redirect(303, '/sign-in?reset');
  },
};
