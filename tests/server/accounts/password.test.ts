import { randomUUID } from 'node:crypto';
import { afterAll, describe, expect, it } from 'vitest';
import {
  changePassword,
  checkSignIn,
  countResetRequest,
  mailResetLink,
  resetPassword,
  startSession,
} from '$lib/server/accounts';
import { readSession } from '$lib/server/accounts/sessions';
import { db } from '$lib/server/database';
import { CookieJar } from '../access/cookie-jar';
import { atOnce, goodPassword, mailsTo, makePerson, tokenIn } from './fixture';

afterAll(() => db.destroy());

const newPassword = 'quartz reed saffron';

async function signedIn(person: App.Person) {
  const cookies = new CookieJar();
  await startSession(cookies, person.id);
  const { sessionId } = (await readSession(cookies))!;
  return { cookies, sessionId };
}

const lets = async (person: App.Person, password: string) =>
  (await checkSignIn(db, person.email, password, `test-${randomUUID()}`)).ok;

async function resetToken(person: App.Person): Promise<string> {
  await mailResetLink(db, person.email);
  return tokenIn((await mailsTo(person.email))[0]);
}

describe('changePassword', () => {
  it('sets the new one, signs out all other sessions, and says so by mail', async () => {
    const person = await makePerson();
    const [here, there] = [await signedIn(person), await signedIn(person)];
    const outcome = await changePassword(db, person.id, here.sessionId, {
      current: goodPassword,
      next: newPassword,
    });
    expect(outcome).toEqual({ ok: true });
    expect(await lets(person, newPassword)).toBe(true);
    expect(await lets(person, goodPassword)).toBe(false);
    expect(await readSession(here.cookies)).not.toBeNull();
    expect(await readSession(there.cookies)).toBeNull();
    expect((await mailsTo(person.email))[0]?.subject).toMatch(/was changed/);
  });

  it.each([
    ['a wrong present password', 'not it at all', newPassword, 'current'],
    ['a new one that is too easy', goodPassword, 'password1234', 'password'],
    ['the present one again', goodPassword, goodPassword, 'password'],
  ])('refuses %s, beside its field, and changes nothing', async (_, current, next, field) => {
    const person = await makePerson();
    const [here, there] = [await signedIn(person), await signedIn(person)];
    const outcome = await changePassword(db, person.id, here.sessionId, { current, next });
    expect(outcome).toMatchObject({ ok: false, field });
    expect(await lets(person, goodPassword)).toBe(true);
    expect(await readSession(there.cookies)).not.toBeNull();
  });

  it('limits how often the present password can be guessed from an open session', async () => {
    const person = await makePerson();
    const { sessionId } = await signedIn(person);
    const guess = () =>
      changePassword(db, person.id, sessionId, { current: 'a guess', next: newPassword });
    for (let i = 0; i < 8; i++) await guess();
    const outcome = await guess();
    expect(!outcome.ok && outcome.waitS).toBeGreaterThan(0);
  });
});

describe('a password reset', () => {
  it('goes by a mailed link: sets the new password and signs out everywhere', async () => {
    const person = await makePerson();
    const { cookies } = await signedIn(person);
    const token = await resetToken(person);
    expect(await resetPassword(db, token, newPassword)).toEqual({ ok: true });
    expect(await lets(person, newPassword)).toBe(true);
    expect(await lets(person, goodPassword)).toBe(false);
    expect(await readSession(cookies)).toBeNull();
  });

  it('works once, also when the link is used many times at once', async () => {
    const token = await resetToken(await makePerson());
    const outcomes = await atOnce(() => resetPassword(db, token, newPassword));
    expect(outcomes.filter((outcome) => outcome.ok)).toHaveLength(1);
    expect((await resetPassword(db, token, newPassword)).ok).toBe(false);
  });

  it('keeps the link working when the new password is too easy', async () => {
    const token = await resetToken(await makePerson());
    expect(await resetPassword(db, token, 'password1234')).toMatchObject({ field: 'password' });
    expect((await resetPassword(db, token, newPassword)).ok).toBe(true);
  });

  it('refuses a link that is too old', async () => {
    const person = await makePerson();
    const token = await resetToken(person);
    await db
      .updateTable('passwordReset')
      .set({ expiresAt: new Date(Date.now() - 1000) })
      .where('personId', '=', person.id)
      .execute();
    expect((await resetPassword(db, token, newPassword)).ok).toBe(false);
    expect(await lets(person, goodPassword)).toBe(true);
  });

  it('makes the links before it useless', async () => {
    const person = await makePerson();
    const first = await resetToken(person);
    const second = await resetToken(person);
    expect(second).not.toBe(first);
    expect((await resetPassword(db, second, newPassword)).ok).toBe(true);
    expect((await resetPassword(db, first, 'umber willow heron')).ok).toBe(false);
  });

  it('keeps no token in the database', async () => {
    const person = await makePerson();
    const token = await resetToken(person);
    const row = await db
      .selectFrom('passwordReset')
      .selectAll()
      .where('personId', '=', person.id)
      .executeTakeFirstOrThrow();
    expect(JSON.stringify(row)).not.toContain(token);
  });

  it('sends nothing to an address without an account', async () => {
    const email = `${randomUUID()}@example.org`;
    await mailResetLink(db, email);
    expect(await mailsTo(email)).toEqual([]);
  });

  it('can be asked for 5 times an hour for one mail address', async () => {
    const email = `${randomUUID()}@example.org`;
    const ask = () => countResetRequest(email, `test-${randomUUID()}`);
    for (let i = 0; i < 5; i++) expect(await ask()).toBe(0);
    const waitS = await ask();
    expect(waitS).toBeGreaterThan(59 * 60);
    expect(waitS).toBeLessThanOrEqual(3600);
  });
});
