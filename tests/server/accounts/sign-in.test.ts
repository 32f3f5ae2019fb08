import { randomUUID } from 'node:crypto';
import { afterAll, describe, expect, it } from 'vitest';
import { checkSignIn, hashPassword, waitMessage } from '$lib/server/accounts';
import { db } from '$lib/server/database';
import { goodPassword, makePerson } from './fixture';

afterAll(() => db.destroy());

/** Limits count by address: each test comes from its own. */
const newAddress = () => `test-${randomUUID()}`;

const attempt = (email: string, password: string, address = newAddress()) =>
  checkSignIn(db, email, password, address);

describe('passwords', () => {
  it('are kept as Argon2id, each with a salt of its own', async () => {
    const [first, second] = await Promise.all([hashPassword('same'), hashPassword('same')]);
    // The encoding is that of the Argon2 reference implementation (RFC 9106, version 0x13 = 19).
    expect(first).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
    expect(first).not.toBe(second);
  });
});

describe('checkSignIn', () => {
  it('lets in the right password and no other', async () => {
    const person = await makePerson();
    expect(await attempt(person.email, goodPassword)).toEqual({ ok: true, personId: person.id });
    expect(await attempt(person.email, `${goodPassword} `)).toEqual({ ok: false, waitS: 0 });
  });

  it('answers the same for an address without an account', async () => {
    const answer = await attempt(`${randomUUID()}@example.org`, goodPassword);
    expect(answer).toEqual({ ok: false, waitS: 0 });
  });

  it('makes an account wait after 8 wrong passwords, from wherever, even for the right one', async () => {
    const person = await makePerson();
    for (let i = 0; i < 8; i++) {
      expect(await attempt(person.email, 'wrong password')).toEqual({ ok: false, waitS: 0 });
    }
    const answer = await attempt(person.email, goodPassword);
    expect(answer.ok).toBe(false);
    if (answer.ok) return;
    expect(answer.waitS).toBeGreaterThan(14 * 60);
    expect(answer.waitS).toBeLessThanOrEqual(15 * 60);
  });

  it('counts attempts that come all at once like attempts in turn', async () => {
    const person = await makePerson();
    const all = await Promise.all(
      Array.from({ length: 12 }, () => attempt(person.email, 'wrong password')),
    );
    expect(all.filter((answer) => !answer.ok && answer.waitS > 0)).toHaveLength(4);
  });

  it('makes an address without an account wait just the same', async () => {
    const email = `${randomUUID()}@example.org`;
    for (let i = 0; i < 8; i++) await attempt(email, 'wrong password');
    const answer = await attempt(email, 'wrong password');
    expect(answer).toMatchObject({ ok: false });
    expect(!answer.ok && answer.waitS).toBeGreaterThan(0);
  });

  it('makes an internet address wait after 40 failures, whichever accounts it tried', async () => {
    const address = newAddress();
    await Promise.all(
      Array.from({ length: 40 }, () => attempt(`${randomUUID()}@example.org`, 'x', address)),
    );
    const person = await makePerson();
    expect((await attempt(person.email, goodPassword, address)).ok).toBe(false);
    expect((await attempt(person.email, goodPassword)).ok).toBe(true);
  });

  it('forgets an account’s failures once the person signs in', async () => {
    const person = await makePerson();
    for (let i = 0; i < 7; i++) await attempt(person.email, 'wrong password');
    expect((await attempt(person.email, goodPassword)).ok).toBe(true);
    for (let i = 0; i < 7; i++) await attempt(person.email, 'wrong password');
    expect((await attempt(person.email, goodPassword)).ok).toBe(true);
  });

  it('does not count sign-ins that succeed against the internet address', async () => {
    const address = newAddress();
    const person = await makePerson();
    for (let i = 0; i < 45; i++) {
      expect((await attempt(person.email, goodPassword, address)).ok).toBe(true);
    }
  });
});

describe('waitMessage', () => {
  it('says how long, in seconds below a minute and in begun minutes above', () => {
    expect(waitMessage(1)).toBe('Too many attempts. Try again in 1 second.');
    expect(waitMessage(59)).toBe('Too many attempts. Try again in 59 seconds.');
    expect(waitMessage(61)).toBe('Too many attempts. Try again in 2 minutes.');
  });
});
