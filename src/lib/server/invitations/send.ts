import type { Role } from '$lib/model/role';
import type { Member } from '../access';
import { notFound } from '../access/not-found';
import { countAttempt, hashToken, newToken, waitMessage, type Outcome } from '../accounts';
import { record } from '../audit';
import type { Db } from '../database';
import { log } from '../log';
import { sendMail } from '../mail';
import { invitationMail } from '../mail/messages';

export const invitationDays = 7;

const expiry = (): Date => new Date(Date.now() + invitationDays * 24 * 3_600_000);

/** Invites by mail; an open invitation to the same address is replaced by the new one. */
export async function invite(
  db: Db,
  member: Member,
  wanted: { email: string; role: Role },
): Promise<Outcome> {
  if (await isMember(db, member.teamId, wanted.email)) {
    return { ok: false, field: 'email', message: 'This person is a member already.' };
  }
  const waitS = await countAttempt('invite-team', member.teamId);
  if (waitS > 0) return { ok: false, field: '', message: waitMessage(waitS), waitS };
  const token = newToken();
  await db.transaction().execute(async (tx) => {
    await tx
      .updateTable('invitation')
      .set({ revokedAt: new Date() })
      .where('teamId', '=', member.teamId)
      .where('email', '=', wanted.email)
      .where('acceptedAt', 'is', null)
      .where('revokedAt', 'is', null)
      .execute();
    const { id } = await tx
      .insertInto('invitation')
      .values({
        teamId: member.teamId,
        ...wanted,
        tokenHash: hashToken(token),
        invitedBy: member.personId,
        expiresAt: expiry(),
        acceptedAt: null,
        revokedAt: null,
      })
      .returning('id')
      .executeTakeFirstOrThrow();
    await record(tx, member, 'invitation.sent', { type: 'invitation', id }, { ...wanted });
  });
  return mailInvitation(member, wanted, token);
}

/** A fresh link with the full time; the link mailed before stops working. */
export async function resendInvitation(
  db: Db,
  member: Member,
  invitationId: string,
): Promise<Outcome> {
  const waitS = await countAttempt('invite-team', member.teamId);
  if (waitS > 0) return { ok: false, field: '', message: waitMessage(waitS), waitS };
  const token = newToken();
  const open = await db
    .updateTable('invitation')
    .set({ tokenHash: hashToken(token), expiresAt: expiry() })
    .where('teamId', '=', member.teamId)
    .where('id', '=', invitationId)
    .where('acceptedAt', 'is', null)
    .where('revokedAt', 'is', null)
    .returning(['id', 'email', 'role'])
    .executeTakeFirst();
  if (!open) return notFound('invitation');
  await record(
    db,
    member,
    'invitation.sent-again',
    { type: 'invitation', id: open.id },
    {
      email: open.email,
    },
  );
  return mailInvitation(member, open, token);
}

/** Returns the address that was invited. */
export async function revokeInvitation(
  db: Db,
  member: Member,
  invitationId: string,
): Promise<string> {
  const open = await db
    .updateTable('invitation')
    .set({ revokedAt: new Date() })
    .where('teamId', '=', member.teamId)
    .where('id', '=', invitationId)
    .where('acceptedAt', 'is', null)
    .where('revokedAt', 'is', null)
    .returning(['id', 'email'])
    .executeTakeFirst();
  if (!open) return notFound('invitation');
  await record(
    db,
    member,
    'invitation.revoked',
    { type: 'invitation', id: open.id },
    {
      email: open.email,
    },
  );
  return open.email;
}

async function isMember(db: Db, teamId: string, email: string): Promise<boolean> {
  const row = await db
    .selectFrom('member')
    .innerJoin('person', 'person.id', 'member.personId')
    .select('person.id')
    .where('member.teamId', '=', teamId)
    .where('person.email', '=', email)
    .executeTakeFirst();
  return row !== undefined;
}

async function mailInvitation(
  member: Member,
  invitation: { email: string; role: Role },
  token: string,
): Promise<Outcome> {
  try {
    const { teamName, personName: inviterName } = member;
    const { email, role } = invitation;
    await sendMail(
      invitationMail({ email, role, teamName, inviterName, token, days: invitationDays }),
    );
    return { ok: true };
  } catch (err) {
    log.error({ err }, 'invitation could not be mailed');
    return {
      ok: false,
      field: '',
      message:
        'The invitation is kept, but the mail could not be sent. Check the mail server (SMTP_URL), then send it again from the list.',
    };
  }
}
