import { fail } from '@sveltejs/kit';
import { message, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { resetRequestSchema } from '$lib/model/account';
import { countResetRequest, mailResetLink, resetHours, waitMessage } from '$lib/server/accounts';
import { db } from '$lib/server/database';
import { log } from '$lib/server/log';
import { mailPageIsOpen } from '$lib/server/mail';

export async function load() {
  return {
    meta: { title: 'Reset the password' },
    form: await superValidate(zod4(resetRequestSchema)),
    hours: resetHours,
    mailPageIsOpen,
  };
}

export const actions = {
  default: async ({ request, getClientAddress }) => {
    const form = await superValidate(request, zod4(resetRequestSchema));
    if (!form.valid) return fail(400, { form });
    const waitS = await countResetRequest(form.data.email, getClientAddress());
    if (waitS > 0) return message(form, waitMessage(waitS), { status: 429 });
    // Not awaited: how long the answer takes must not tell whether the address has an account.
    mailResetLink(db, form.data.email).catch((err: unknown) =>
      log.error({ err }, 'reset link could not be mailed'),
    );
    return { form, sent: true };
  },
};
