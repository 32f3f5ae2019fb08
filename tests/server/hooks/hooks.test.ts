import type { Handle, RequestEvent } from '@sveltejs/kit';
import { afterAll, describe, expect, it } from 'vitest';
import { startSession } from '$lib/server/accounts';
import { chooseTeam } from '$lib/server/accounts/memberships';
import { db } from '$lib/server/database';
import { handleError } from '$lib/server/hooks/handle-error';
import { logLine } from '$lib/server/hooks/log-line';
import { requestId } from '$lib/server/hooks/request-id';
import { securityHeaders } from '$lib/server/hooks/security-headers';
import { session } from '$lib/server/hooks/session';
import { theme } from '$lib/server/hooks/theme';
import { CookieJar } from '../access/cookie-jar';
import { makePerson, makeTeam } from '../accounts/fixture';

afterAll(() => db.destroy());

type Resolve = Parameters<Handle>[0]['resolve'];

function eventWith(cookies: CookieJar): RequestEvent {
  return {
    cookies,
    locals: {} as App.Locals,
    request: new Request('http://localhost/studies'),
    route: { id: '/(app)/studies' },
    url: new URL('http://localhost/studies'),
    isSubRequest: false,
  } as unknown as RequestEvent;
}

/** What kit would make of a page: the template goes through the hooks' own transform. */
const page: Resolve = async (_event, options) => {
  const html = '<html data-theme="%nullwright.theme%">';
  return new Response(await options?.transformPageChunk?.({ html, done: true }));
};

/** One request through all hooks, in the order of hooks.server.ts. */
async function handle(event: RequestEvent): Promise<Response> {
  const hooks = [requestId, logLine, securityHeaders, session, theme];
  const chain = hooks.reduceRight<Resolve>(
    (resolve, hook) => async (passed) => hook({ event: passed, resolve }),
    page,
  );
  return chain(event);
}

describe('the hooks', () => {
  it('gives each request an id and the headers of an isolated page', async () => {
    const event = eventWith(new CookieJar());
    const response = await handle(event);
    expect(response.headers.get('x-request-id')).toBe(event.locals.requestId);
    // What SharedArrayBuffer needs (HTML standard, cross-origin isolation).
    expect(response.headers.get('cross-origin-opener-policy')).toBe('same-origin');
    expect(response.headers.get('cross-origin-embedder-policy')).toBe('require-corp');
    expect(response.headers.get('x-content-type-options')).toBe('nosniff');
  });

  it('leaves the signed-out without person, member and teams', async () => {
    const event = eventWith(new CookieJar());
    await handle(event);
    expect(event.locals).toMatchObject({ person: null, member: null, memberships: [] });
  });

  it('takes the team chosen in the header, as long as the person belongs to it', async () => {
    const person = await makePerson();
    const teams = [await makeTeam(person), await makeTeam(person)];
    const foreign = await makeTeam(await makePerson());
    const cookies = new CookieJar();
    await startSession(cookies, person.id);
    for (const team of teams) {
      chooseTeam(cookies, team.teamId);
      const event = eventWith(cookies);
      await handle(event);
      expect(event.locals.member).toEqual(team);
    }
    chooseTeam(cookies, foreign.teamId);
    const event = eventWith(cookies);
    await handle(event);
    expect(teams).toContainEqual(event.locals.member);
  });

  it('takes a role that was changed meanwhile from the next request on', async () => {
    const person = await makePerson();
    const team = await makeTeam(person);
    const cookies = new CookieJar();
    await startSession(cookies, person.id);
    await db
      .updateTable('member')
      .set({ role: 'viewer' })
      .where('teamId', '=', team.teamId)
      .execute();
    const event = eventWith(cookies);
    await handle(event);
    expect(event.locals.member?.role).toBe('viewer');
  });

  it.each([
    ['dark', 'dark'],
    ['light', 'light'],
    ['"><script>', 'system'],
    [undefined, 'system'],
  ])('renders the theme cookie %j as %s', async (kept, shown) => {
    const cookies = new CookieJar();
    if (kept) cookies.set('nullwright_theme', kept, {});
    const response = await handle(eventWith(cookies));
    expect(await response.text()).toBe(`<html data-theme="${shown}">`);
  });
});

describe('handleError', () => {
  const told = (error: unknown, status: number, message = 'Internal Error') =>
    handleError({ error, status, event: eventWith(new CookieJar()), message });

  it('tells a person nothing of an unexpected error but a random id', async () => {
    const problem = new Error('password of the database is hunter2');
    const [first, second] = [await told(problem, 500), await told(problem, 500)];
    expect(JSON.stringify(first)).not.toContain('hunter2');
    expect(first).toMatchObject({ code: 'unexpected', id: expect.stringMatching(/^[0-9a-f]{8}$/) });
    expect(second).not.toEqual(first);
  });

  it('blames nobody but the request for what kit refuses, and needs no id for it', async () => {
    const refused = await told(new Error('Form actions expect'), 415, 'Unsupported Media Type');
    expect(refused).toEqual({
      code: 'refused',
      message: 'The request was refused: Unsupported Media Type.',
    });
  });

  it('calls a page that does not exist not found', async () => {
    expect(await told(new Error('Not found'), 404)).toMatchObject({ code: 'not-found' });
  });
});
