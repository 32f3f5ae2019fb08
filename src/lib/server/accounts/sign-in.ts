import type { Db } from '../database';
import { countAttempt, forgetAttempts, takeBackAttempt } from './limits';
import { passwordMatches } from './passwords';

type SignIn = { ok: true; personId: string } | { ok: false; waitS: number };

/**
 * Checks mail address and password. Counted before the check, so that attempts sent all at once
 * are not more than attempts sent in turn; an unknown address is handled exactly like a known one.
 */
export async function checkSignIn(
  db: Db,
  email: string,
  password: string,
  address: string,
): Promise<SignIn> {
  const waits = await Promise.all([
    countAttempt('sign-in-address', address),
    countAttempt('sign-in-account', email),
  ]);
  const waitS = Math.max(...waits);
  if (waitS > 0) return { ok: false, waitS };

  const person = await db
    .selectFrom('person')
    .select(['id', 'passwordHash'])
    .where('email', '=', email)
    .executeTakeFirst();
  const matches = await passwordMatches(person?.passwordHash, password);
  if (!person || !matches) return { ok: false, waitS: 0 };

  await forgetAttempts('sign-in-account', email);
  await takeBackAttempt('sign-in-address', address);
  return { ok: true, personId: person.id };
}
