import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { roles } from '$lib/model/role';
import { may } from '$lib/server/access';
import { db } from '$lib/server/database';
import { accessTable, type Expectation } from './access-table';
import { call, type Answer } from './access/call';
import { CookieJar } from './access/cookie-jar';
import { fingerprint } from './access/fingerprint';
import { readRoutes } from './access/handlers';
import { makeWorld, type World } from './access/world';

// Found on disk, not listed by hand: a new file or handler without a row fails the first test.
const routes = await readRoutes();
const found = routes.flatMap(({ file, handlers }) =>
  [...handlers.keys()].map((h) => `${file} ${h}`),
);
const listed = Object.entries(accessTable).flatMap(([file, rows]) =>
  Object.keys(rows).map((handler) => `${file} ${handler}`),
);

/** Handlers that change nothing leave the world fit for the next one. */
const reading = new Set(['load', 'GET', 'HEAD', 'OPTIONS']);

afterAll(() => db.destroy());

describe('the table of expectations', () => {
  it('has a row for every load, action and endpoint, and none for one that is gone', () => {
    expect(found.length).toBeGreaterThan(0);
    expect(listed.toSorted()).toEqual(found.toSorted());
  });

  it('gives a reason wherever it leaves a handler open', () => {
    for (const rows of Object.values(accessTable)) {
      for (const row of Object.values(rows).flat()) {
        if ('open' in row) expect(row.open.length).toBeGreaterThan(20);
      }
    }
  });
});

for (const route of routes) {
  for (const handler of route.handlers.keys()) {
    for (const row of [accessTable[route.file]?.[handler] ?? []].flat()) {
      if ('open' in row) continue;
      describe(`${route.file} ${handler}`, () => proveGuard(route, handler, row));
    }
  }
}

function proveGuard(
  route: (typeof routes)[number],
  handler: string,
  row: Extract<Expectation, { action: unknown }>,
): void {
  let world: World;
  let before: string;
  beforeAll(async () => {
    world = await makeWorld();
  });

  async function ask(cookies: CookieJar, asker = world.members.lead): Promise<Answer> {
    const parts = await row.request(world, asker);
    before = await fingerprint(world.teamId);
    return call({ route, handler, routes, cookies, parts });
  }
  const nothingChanged = async () => expect(await fingerprint(world.teamId)).toBe(before);

  it('refuses the signed-out, and a session that does not exist', async () => {
    const forged = new CookieJar();
    forged.set('nullwright_session', 'x'.repeat(43), {});
    for (const cookies of [new CookieJar(), forged]) {
      expectSignIn(await ask(cookies), route.routeId);
      await nothingChanged();
    }
  });

  it(`refuses whoever may not ${row.action}`, async () => {
    const wrong = roles.filter((role) => !may(role, row.action)).map((role) => world.actors[role]);
    for (const actor of [...wrong, world.loner]) {
      expect((await ask(actor.cookies)).status).toBe(403);
      await nothingChanged();
    }
  });

  it('tells and changes nothing of this team for the lead of another', async () => {
    const answer = await ask(world.stranger.cookies);
    if (row.otherTeam === 'not-found') expect(answer.status).toBe(404);
    else expect([401, 403, 404, 500]).not.toContain(answer.status);
    for (const secret of world.secrets) expect(answer.text).not.toContain(secret);
    await nothingChanged();
  });

  const right = roles.filter((role) => may(role, row.action));
  it.each(right)('lets in a %s, who is not refused', async (role) => {
    if (!reading.has(handler)) world = await makeWorld();
    const answer = await ask(world.actors[role].cookies, world.members[role]);
    expect([401, 403, 404, 500]).not.toContain(answer.status);
    expect(answer.location ?? '').not.toContain('/sign-in');
  });
}

function expectSignIn(answer: Answer, routeId: string): void {
  if (routeId.startsWith('/api/')) {
    expect(answer.status).toBe(401);
  } else {
    expect(answer.status).toBe(303);
    expect(answer.location).toMatch(/^\/sign-in\?next=/);
  }
}
