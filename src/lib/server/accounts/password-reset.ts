import type { Db } from '../database';
import { sendMail } from '../mail';
import { passwordResetMail } from '../mail/messages';
import { countAttempt, forgetAttempts } from './limits';
import { passwordProblem } from './password-rules';
import { type Outcome, setPassword, tellOfChange } from './people';
import { revokeSessions } from './sessions';
import { hashToken, newToken } from './tokens';

export const resetHours = 1;

/** How long to wait before the next request, in seconds; 0 when this one may go on. */
export async function countResetRequest(email: string, address: string): Promise<number> {
  const waits = await Promise.all([
    countAttempt('reset-address', address),
    countAttempt('reset-account', email),
  ]);
  return Math.max(...waits);
}

/** Mails a link to the person with this address, if there is one; says nothing either way. */
export async function mailResetLink(db: Db, email: string): Promise<void> {
  const person = await db
    .selectFrom('person')
    .select(['id', 'email', 'name'])
    .where('email', '=', email)
    .executeTakeFirst();
  if (!person) return;
  const token = newToken();
  await db
    .insertInto('passwordReset')
    .values({
      personId: person.id,
      tokenHash: hashToken(token),
      expiresAt: new Date(Date.now() + resetHours * 3_600_000),
      usedAt: null,
    })
    .execute();
  await sendMail(passwordResetMail(person, token, resetHours));
}

/** Whose password the link resets; undefined for a link that is used, too old or made up. */
export function findReset(db: Db, token: string) {
  return db
    .selectFrom('passwordReset')
    .innerJoin('person', 'person.id', 'passwordReset.personId')
    .select(['passwordReset.id', 'person.id as personId', 'person.email', 'person.name'])
    .where('passwordReset.tokenHash', '=', hashToken(token))
    .where('passwordReset.usedAt', 'is', null)
    .where('passwordReset.expiresAt', '>', new Date())
    .executeTakeFirst();
}

/** Uses the link up, sets the password, and signs the person out everywhere. */
export async function resetPassword(db: Db, token: string, password: string): Promise<Outcome> {
  const gone: Outcome = {
    ok: false,
    field: '',
    message: 'This link was used already or is too old. Ask for a new one.',
  };
  const reset = await findReset(db, token);
  if (!reset) return gone;
  const problem = passwordProblem(password, reset);
  if (problem) return { ok: false, field: 'password', message: problem };
  // Of two requests with one link, the condition lets only the first through.
  const used = await db
    .updateTable('passwordReset')
    .set({ usedAt: new Date() })
    .where('id', '=', reset.id)
    .where('usedAt', 'is', null)
    .returning('id')
    .executeTakeFirst();
  if (!used) return gone;
  await setPassword(db, reset.personId, password);
  await revokeSessions(reset.personId);
  await forgetAttempts('sign-in-account', reset.email);
  await tellOfChange(reset);
  return { ok: true };
}
