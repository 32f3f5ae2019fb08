import type { Handle } from '@sveltejs/kit';
import { chosenMembership, listMemberships } from '../accounts/memberships';
import { readSession } from '../accounts/sessions';
import { db } from '../database';

/** Says who acts, and for which team; what they may do is asked by each load, action, endpoint. */
export const session: Handle = async ({ event, resolve }) => {
  const { locals, cookies } = event;
  locals.person = null;
  locals.sessionId = null;
  locals.member = null;
  locals.memberships = [];
  // The health check must answer, and say what is wrong, while the database is away.
  if (event.route.id === '/api/health') return resolve(event);

  const read = await readSession(cookies);
  if (read) {
    locals.person = read.person;
    locals.sessionId = read.sessionId;
    locals.memberships = await listMemberships(db, read.person);
    locals.member = chosenMembership(cookies, locals.memberships);
  }
  return resolve(event);
};
