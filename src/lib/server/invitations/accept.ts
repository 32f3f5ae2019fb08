import type { Transaction } from 'kysely';
import { createPerson, hashPassword, passwordProblem, type Outcome } from '../accounts';
import { record } from '../audit';
import type { Database, Db } from '../database';
import { findInvitation } from './find';

type Accepted = { ok: true; personId: string; teamId: string } | Extract<Outcome, { ok: false }>;
type Invitation = NonNullable<Awaited<ReturnType<typeof findInvitation>>>;

const gone: Accepted = {
  ok: false,
  field: '',
  message: 'This invitation was used, withdrawn or is too old. Ask for a new one.',
};

/** Makes an account for the invited address, which the mailed link proves to be the person's. */
export async function acceptAsNew(
  db: Db,
  token: string,
  wanted: { name: string; password: string },
): Promise<Accepted> {
  const invitation = await findInvitation(db, token);
  if (!invitation) return gone;
  if (invitation.personId) {
    return { ok: false, field: '', message: 'There is an account for this address. Sign in.' };
  }
  const { email } = invitation;
  const problem = passwordProblem(wanted.password, { email, name: wanted.name });
  if (problem) return { ok: false, field: 'password', message: problem };
  const passwordHash = await hashPassword(wanted.password);
  return db.transaction().execute(async (tx) => {
    if (!(await useUp(tx, invitation.id))) return gone;
    const personId = await createPerson(tx, { email, name: wanted.name, passwordHash });
    return join(tx, invitation, personId);
  });
}

/** Joins with the account the person is signed in with; it must be the invited address's. */
export async function acceptAsPerson(db: Db, token: string, person: App.Person): Promise<Accepted> {
  const invitation = await findInvitation(db, token);
  if (!invitation) return gone;
  if (invitation.email !== person.email) {
    return {
      ok: false,
      field: '',
      message: `The invitation is for ${invitation.email}; you are signed in as ${person.email}.`,
    };
  }
  return db.transaction().execute(async (tx) => {
    if (!(await useUp(tx, invitation.id))) return gone;
    return join(tx, invitation, person.id);
  });
}

/** Of two requests with one link, the condition lets only the first through. */
async function useUp(tx: Transaction<Database>, invitationId: string): Promise<boolean> {
  const row = await tx
    .updateTable('invitation')
    .set({ acceptedAt: new Date() })
    .where('id', '=', invitationId)
    .where('acceptedAt', 'is', null)
    .where('revokedAt', 'is', null)
    .returning('id')
    .executeTakeFirst();
  return row !== undefined;
}

async function join(
  tx: Transaction<Database>,
  { id, teamId, role }: Invitation,
  personId: string,
): Promise<Accepted> {
  await tx
    .insertInto('member')
    .values({ teamId, personId, role })
    .onConflict((conflict) => conflict.columns(['teamId', 'personId']).doNothing())
    .execute();
  const subject = { type: 'invitation', id };
  await record(tx, { teamId, personId }, 'invitation.accepted', subject, { role });
  return { ok: true, personId, teamId };
}
