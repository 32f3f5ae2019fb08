import type { Transaction } from 'kysely';
import type { Role } from '$lib/model/role';
import type { Member } from '../access';
import { notFound } from '../access/not-found';
import type { Outcome } from '../accounts';
import { record } from '../audit';
import type { Database, Db } from '../database';

export function listMembers(db: Db, teamId: string) {
  return db
    .selectFrom('member')
    .innerJoin('person', 'person.id', 'member.personId')
    .select(['person.id', 'person.name', 'person.email', 'member.role', 'member.createdAt'])
    .where('member.teamId', '=', teamId)
    .orderBy('person.name')
    .execute();
}

export function changeRole(db: Db, member: Member, personId: string, role: Role): Promise<Outcome> {
  return db.transaction().execute(async (tx) => {
    const before = await lockMember(tx, member.teamId, personId);
    if (before.role === role) return { ok: true };
    if (role !== 'lead' && before.isLastLead) return lastLead(before.name);
    await tx
      .updateTable('member')
      .set({ role })
      .where('teamId', '=', member.teamId)
      .where('personId', '=', personId)
      .execute();
    const detail = { name: before.name, from: before.role, to: role };
    await record(tx, member, 'member.role-changed', { type: 'person', id: personId }, detail);
    return { ok: true };
  });
}

/** Ends the membership; the person keeps the account, and what they made stays with the team. */
export function removeMember(db: Db, member: Member, personId: string): Promise<Outcome> {
  return db.transaction().execute(async (tx) => {
    const before = await lockMember(tx, member.teamId, personId);
    if (before.isLastLead) return lastLead(before.name);
    await tx
      .deleteFrom('member')
      .where('teamId', '=', member.teamId)
      .where('personId', '=', personId)
      .execute();
    const detail = { name: before.name, role: before.role };
    await record(tx, member, 'member.removed', { type: 'person', id: personId }, detail);
    return { ok: true };
  });
}

/** Locks the team's row first: two leads who step down at once must not both be let go. */
async function lockMember(tx: Transaction<Database>, teamId: string, personId: string) {
  await tx.selectFrom('team').select('id').where('id', '=', teamId).forUpdate().execute();
  const members = await tx
    .selectFrom('member')
    .innerJoin('person', 'person.id', 'member.personId')
    .select(['person.id', 'person.name', 'member.role'])
    .where('member.teamId', '=', teamId)
    .execute();
  const found = members.find((one) => one.id === personId);
  if (!found) return notFound('member');
  const leads = members.filter((one) => one.role === 'lead');
  return { ...found, isLastLead: found.role === 'lead' && leads.length === 1 };
}

function lastLead(name: string): Outcome {
  return {
    ok: false,
    field: 'role',
    message: `${name} is the only lead. Make somebody else a lead first.`,
  };
}
