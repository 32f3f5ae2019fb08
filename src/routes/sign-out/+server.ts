import { redirect } from '@sveltejs/kit';
import { endSession } from '$lib/server/accounts/sessions';

/** Ends this session only; for the signed-out it changes nothing. */
export async function POST({ locals, cookies }) {
  await endSession(cookies, locals.sessionId);
  redirect(303, '/sign-in');
}
