import { hashToken } from '../accounts';
import type { Member } from '../access';
import type { Db } from '../database';

/** The team's invitations that nobody has accepted or revoked, newest first. */
export function listInvitations(db: Db, teamId: Member['teamId']) {
  return db
    .selectFrom('invitation')
    .innerJoin('person', 'person.id', 'invitation.invitedBy')
    .select([
      'invitation.id',
      'invitation.email',
      'invitation.role',
      'invitation.createdAt',
      'invitation.expiresAt',
      'person.name as invitedBy',
    ])
    .where('invitation.teamId', '=', teamId)
    .where('acceptedAt', 'is', null)
    .where('revokedAt', 'is', null)
    .orderBy('invitation.createdAt', 'desc')
    .execute();
}

/** What a mailed link stands for; undefined for one that is used, revoked, too old or made up. */
export async function findInvitation(db: Db, token: string) {
  return db
    .selectFrom('invitation')
    .innerJoin('team', 'team.id', 'invitation.teamId')
    .innerJoin('person as inviter', 'inviter.id', 'invitation.invitedBy')
    .leftJoin('person', 'person.email', 'invitation.email')
    .select([
      'invitation.id',
      'invitation.teamId',
      'invitation.email',
      'invitation.role',
      'team.name as teamName',
      'inviter.name as inviterName',
      'person.id as personId',
    ])
    .where('invitation.tokenHash', '=', hashToken(token))
    .where('acceptedAt', 'is', null)
    .where('revokedAt', 'is', null)
    .where('expiresAt', '>', new Date())
    .executeTakeFirst();
}
