import type { Cookies } from '@sveltejs/kit';
import { lucia } from './lucia';
import { hashToken, newToken } from './tokens';

// The cookie carries a random token; the session's id is its hash, so that a copy of the
// database opens no door.

interface ReadSession {
  person: App.Person;
  sessionId: string;
}

export async function startSession(cookies: Cookies, personId: string): Promise<void> {
  const token = newToken();
  await lucia.createSession(personId, {}, { sessionId: hashToken(token) });
  setCookie(cookies, token);
}

/** Who the cookie's token stands for; prolongs a session that is past half of its time. */
export async function readSession(cookies: Cookies): Promise<ReadSession | null> {
  const token = cookies.get(lucia.sessionCookieName);
  if (!token) return null;
  const { session, user } = await lucia.validateSession(hashToken(token));
  if (!session) {
    clearCookie(cookies);
    return null;
  }
  if (session.fresh) setCookie(cookies, token);
  return { person: { id: user.id, name: user.name, email: user.email }, sessionId: session.id };
}

export async function endSession(cookies: Cookies, sessionId: string | null): Promise<void> {
  if (sessionId) await lucia.invalidateSession(sessionId);
  clearCookie(cookies);
}

/** After a change of password: whoever else holds a session is signed out. */
export async function revokeSessions(personId: string, exceptId?: string): Promise<void> {
  const sessions = await lucia.getUserSessions(personId);
  const others = sessions.filter((session) => session.id !== exceptId);
  await Promise.all(others.map((session) => lucia.invalidateSession(session.id)));
}

/** How many other browsers the person is signed in with. */
export async function countOtherSessions(personId: string, sessionId: string): Promise<number> {
  const sessions = await lucia.getUserSessions(personId);
  return sessions.filter((session) => session.id !== sessionId).length;
}

/** Rows of sessions nobody will use again; called when the server starts. */
export async function forgetExpiredSessions(): Promise<void> {
  await lucia.deleteExpiredSessions();
}

function setCookie(cookies: Cookies, token: string): void {
  const { name, value, attributes } = lucia.createSessionCookie(token);
  cookies.set(name, value, { ...attributes, path: '/' });
}

function clearCookie(cookies: Cookies): void {
  const { name, value, attributes } = lucia.createBlankSessionCookie();
  cookies.set(name, value, { ...attributes, path: '/' });
}
