import { randomUUID } from 'node:crypto';
import { sql } from 'kysely';
import { hashPassword } from '$lib/server/accounts';
import { db } from '$lib/server/database';
import { listKeptMails, type KeptMail } from '$lib/server/mail';

export const goodPassword = 'heron ember lagoon';
const goodHash = hashPassword(goodPassword);

/** A person of their own, whose password is `goodPassword`. */
export async function makePerson(): Promise<App.Person> {
  return db
    .insertInto('person')
    .values({
      email: `${randomUUID()}@example.org`,
      name: 'Tess Tarn',
      passwordHash: await goodHash,
    })
    .returning(['id', 'name', 'email'])
    .executeTakeFirstOrThrow();
}

export async function makeTeam(lead: App.Person): Promise<App.Member> {
  const team = await db
    .insertInto('team')
    .values({ name: 'Test laboratory' })
    .returning(['id', 'name'])
    .executeTakeFirstOrThrow();
  await db
    .insertInto('member')
    .values({ teamId: team.id, personId: lead.id, role: 'lead' })
    .execute();
  return {
    personId: lead.id,
    personName: lead.name,
    teamId: team.id,
    teamName: team.name,
    teamSimulated: false,
    role: 'lead',
  };
}

/** The mails that the fake mail server received for an address, newest first. */
export async function mailsTo(email: string): Promise<KeptMail[]> {
  return (await listKeptMails(1000)).filter((mail) => mail.to === email);
}

/** The token in the link of a mail. */
export function tokenIn(mail: KeptMail | undefined): string {
  const token = /\/(?:invitation|reset-password)\/([\w-]+)/.exec(mail?.text ?? '')?.[1];
  if (!token) throw new Error(`there is no link in: ${mail?.text ?? 'no mail'}`);
  return token;
}

/**
 * Runs the same work many times at once, on connections that are open already: a race that is
 * there is met.
 */
export async function atOnce<T>(work: () => Promise<T>): Promise<T[]> {
  const times = Array.from({ length: 8 }, (_, i) => i);
  let held = 0;
  let release = () => {};
  const allHeld = new Promise<void>((resolve) => (release = resolve));
  await Promise.all(
    times.map(() =>
      db.connection().execute(async (connection) => {
        await sql`select 1`.execute(connection);
        held += 1;
        if (held === times.length) release();
        await allHeld;
      }),
    ),
  );
  return Promise.all(times.map(() => work()));
}
