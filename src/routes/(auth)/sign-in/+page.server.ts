import { fail, redirect } from '@sveltejs/kit';
import { message, setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { signInSchema } from '$lib/model/account';
import { checkSignIn, demoSignIn, nextPath, startSession, waitMessage } from '$lib/server/accounts';
import { db } from '$lib/server/database';
import { mailPageIsOpen } from '$lib/server/mail';

export async function load({ locals, url }) {
  const next = nextPath(url.searchParams.get('next'), '');
  if (locals.person) redirect(303, next || '/studies');
  return {
    meta: { title: 'Sign in' },
    form: await superValidate({ next }, zod4(signInSchema), { errors: false }),
    wasReset: url.searchParams.has('reset'),
    demo: demoSignIn(),
    mailPageIsOpen,
  };
}

export const actions = {
  default: async ({ request, cookies, getClientAddress }) => {
    const form = await superValidate(request, zod4(signInSchema));
    const { email, password, next } = form.data;
    form.data.password = '';
    if (!form.valid) return fail(400, { form });
    const checked = await checkSignIn(db, email, password, getClientAddress());
    if (!checked.ok && checked.waitS > 0) {
      return message(form, waitMessage(checked.waitS), { status: 429 });
    }
    if (!checked.ok) return setError(form, '', 'Mail address or password is wrong.');
    await startSession(cookies, checked.personId);
    redirect(303, nextPath(next));
  },
};
