import { createHash, randomUUID } from 'node:crypto';
import { afterAll, describe, expect, it } from 'vitest';
import { endSession, revokeSessions, startSession } from '$lib/server/accounts';
import { readSession } from '$lib/server/accounts/sessions';
import { db } from '$lib/server/database';
import { CookieJar } from '../access/cookie-jar';
import { makePerson } from './fixture';

afterAll(() => db.destroy());

const name = 'nullwright_session';

async function signedIn(person: App.Person): Promise<CookieJar> {
  const cookies = new CookieJar();
  await startSession(cookies, person.id);
  return cookies;
}

const rowsOf = (personId: string) =>
  db.selectFrom('session').selectAll().where('userId', '=', personId).execute();

describe('a session', () => {
  it('says who the cookie stands for', async () => {
    const person = await makePerson();
    const read = await readSession(await signedIn(person));
    expect(read?.person).toEqual(person);
  });

  it('is kept in a cookie that scripts and other sites cannot use', async () => {
    const cookies = await signedIn(await makePerson());
    expect(cookies.attributes.get(name)).toMatchObject({
      httpOnly: true,
      sameSite: 'lax',
      path: '/',
    });
  });

  it('stands in the database as a hash of the token only', async () => {
    const person = await makePerson();
    const token = (await signedIn(person)).get(name)!;
    const [row] = await rowsOf(person.id);
    expect(row!.id).toBe(createHash('sha256').update(token).digest('hex'));
    // The id from a copy of the database opens nothing.
    const thief = new CookieJar();
    thief.set(name, row!.id, {});
    expect(await readSession(thief)).toBeNull();
  });

  it('ends where it is signed out, and leaves the others', async () => {
    const person = await makePerson();
    const [here, there] = [await signedIn(person), await signedIn(person)];
    const { sessionId } = (await readSession(here))!;
    const token = here.get(name)!;
    await endSession(here, sessionId);
    expect(here.get(name)).toBeUndefined();
    here.set(name, token, {});
    expect(await readSession(here)).toBeNull();
    expect(await readSession(there)).not.toBeNull();
  });

  it('is refused after its time, and its row is gone', async () => {
    const person = await makePerson();
    const cookies = await signedIn(person);
    await db
      .updateTable('session')
      .set({ expiresAt: new Date(Date.now() - 1000) })
      .where('userId', '=', person.id)
      .execute();
    expect(await readSession(cookies)).toBeNull();
    expect(await rowsOf(person.id)).toEqual([]);
  });

  it('is prolonged once half of its time is over', async () => {
    const person = await makePerson();
    const cookies = await signedIn(person);
    const soon = new Date(Date.now() + 24 * 3_600_000);
    await db
      .updateTable('session')
      .set({ expiresAt: soon })
      .where('userId', '=', person.id)
      .execute();
    await readSession(cookies);
    const [row] = await rowsOf(person.id);
    expect(row!.expiresAt.getTime()).toBeGreaterThan(soon.getTime());
  });

  it('with a made-up token is nobody, and the cookie is cleared', async () => {
    const cookies = new CookieJar();
    cookies.set(name, randomUUID(), {});
    expect(await readSession(cookies)).toBeNull();
    expect(cookies.get(name)).toBeUndefined();
  });
});

describe('revokeSessions', () => {
  it('signs a person out everywhere but in the session named', async () => {
    const person = await makePerson();
    const other = await signedIn(await makePerson());
    const [here, there] = [await signedIn(person), await signedIn(person)];
    await revokeSessions(person.id, (await readSession(here))!.sessionId);
    expect(await readSession(here)).not.toBeNull();
    expect(await readSession(there)).toBeNull();
    expect(await readSession(other)).not.toBeNull();
  });
});
