import type { Db } from '../database';
import { log } from '../log';
import { sendMail } from '../mail';
import { passwordChangedMail } from '../mail/messages';
import { countAttempt, forgetAttempts } from './limits';
import { passwordProblem } from './password-rules';
import { hashPassword, passwordMatches } from './passwords';
import { revokeSessions } from './sessions';

/** What was wrong, at which field of the form. */
export type Outcome = { ok: true } | { ok: false; field: string; message: string; waitS?: number };

export async function renamePerson(db: Db, personId: string, name: string): Promise<void> {
  await db.updateTable('person').set({ name }).where('id', '=', personId).execute();
}

/** Makes an account; the caller has proved that the mail address is the person's own. */
export async function createPerson(
  db: Db,
  person: { email: string; name: string; passwordHash: string },
): Promise<string> {
  const row = await db
    .insertInto('person')
    .values(person)
    .returning('id')
    .executeTakeFirstOrThrow();
  return row.id;
}

/** Sets a new password, and signs out every session but the one it was changed in. */
export async function changePassword(
  db: Db,
  personId: string,
  sessionId: string,
  passwords: { current: string; next: string },
): Promise<Outcome> {
  const person = await db
    .selectFrom('person')
    .select(['email', 'name', 'passwordHash'])
    .where('id', '=', personId)
    .executeTakeFirstOrThrow();
  const waitS = await countAttempt('sign-in-account', person.email);
  if (waitS > 0) return { ok: false, field: 'current', message: 'Too many attempts.', waitS };
  if (!(await passwordMatches(person.passwordHash, passwords.current))) {
    return { ok: false, field: 'current', message: 'This is not your present password.' };
  }
  await forgetAttempts('sign-in-account', person.email);
  const problem = passwordProblem(passwords.next, person);
  if (problem) return { ok: false, field: 'password', message: problem };
  if (passwords.next === passwords.current) {
    return { ok: false, field: 'password', message: 'This is your present password.' };
  }
  await setPassword(db, personId, passwords.next);
  await revokeSessions(personId, sessionId);
  await tellOfChange(person);
  return { ok: true };
}

/** Stores the hash, and makes reset links that are still under way useless. */
export async function setPassword(db: Db, personId: string, password: string): Promise<void> {
  const passwordHash = await hashPassword(password);
  await db.transaction().execute(async (tx) => {
    await tx.updateTable('person').set({ passwordHash }).where('id', '=', personId).execute();
    await tx
      .updateTable('passwordReset')
      .set({ usedAt: new Date() })
      .where('personId', '=', personId)
      .where('usedAt', 'is', null)
      .execute();
  });
}

/** The change stands whether or not the mail about it can be sent. */
export async function tellOfChange(person: { email: string; name: string }): Promise<void> {
  try {
    await sendMail(passwordChangedMail(person));
  } catch (err) {
    log.warn({ err }, 'mail about a changed password could not be sent');
  }
}
