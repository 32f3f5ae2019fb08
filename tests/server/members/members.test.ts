import { afterAll, describe, expect, it } from 'vitest';
import type { Role } from '$lib/model/role';
import { listRecord, record } from '$lib/server/audit';
import { db } from '$lib/server/database';
import { changeRole, listMembers, removeMember } from '$lib/server/members';
import { makePerson, makeTeam } from '../accounts/fixture';

afterAll(() => db.destroy());

async function team(...others: Role[]) {
  const lead = await makeTeam(await makePerson());
  const people: App.Person[] = [];
  for (const role of others) {
    const person = await makePerson();
    await db
      .insertInto('member')
      .values({ teamId: lead.teamId, personId: person.id, role })
      .execute();
    people.push(person);
  }
  return { lead, people };
}

const rolesIn = async (teamId: string) =>
  Object.fromEntries((await listMembers(db, teamId)).map((member) => [member.id, member.role]));

describe('changeRole', () => {
  it('changes the role, and the record keeps both', async () => {
    const { lead, people } = await team('viewer');
    expect(await changeRole(db, lead, people[0]!.id, 'researcher')).toEqual({ ok: true });
    expect((await rolesIn(lead.teamId))[people[0]!.id]).toBe('researcher');
    const { events } = await listRecord(db, lead.teamId);
    expect(events[0]).toMatchObject({
      action: 'member.role-changed',
      personName: lead.personName,
      detail: { from: 'viewer', to: 'researcher' },
    });
  });

  it('never takes the last lead from a team', async () => {
    const { lead } = await team('researcher');
    expect(await changeRole(db, lead, lead.personId, 'viewer')).toMatchObject({ ok: false });
    expect((await rolesIn(lead.teamId))[lead.personId]).toBe('lead');
  });

  it('keeps one lead when two step down at the same time', async () => {
    const { lead, people } = await team('lead');
    const outcomes = await Promise.all([
      changeRole(db, lead, lead.personId, 'viewer'),
      changeRole(db, lead, people[0]!.id, 'viewer'),
    ]);
    expect(outcomes.filter((outcome) => outcome.ok)).toHaveLength(1);
    expect(Object.values(await rolesIn(lead.teamId)).sort()).toEqual(['lead', 'viewer']);
  });

  it('does not find a person who is no member of the team', async () => {
    const { lead } = await team();
    const outsider = await makePerson();
    await expect(changeRole(db, lead, outsider.id, 'viewer')).rejects.toMatchObject({
      status: 404,
    });
  });
});

describe('removeMember', () => {
  it('ends the membership and keeps the account', async () => {
    const { lead, people } = await team('statistician');
    expect(await removeMember(db, lead, people[0]!.id)).toEqual({ ok: true });
    expect(Object.keys(await rolesIn(lead.teamId))).toEqual([lead.personId]);
    const account = await db
      .selectFrom('person')
      .select('id')
      .where('id', '=', people[0]!.id)
      .executeTakeFirst();
    expect(account).toBeDefined();
  });

  it('never takes the last lead from a team', async () => {
    const { lead } = await team('viewer');
    expect(await removeMember(db, lead, lead.personId)).toMatchObject({ ok: false });
    expect(Object.keys(await rolesIn(lead.teamId))).toHaveLength(2);
  });
});

describe('listRecord', () => {
  it('gives each event once over its pages, newest first, of this team only', async () => {
    const { lead } = await team();
    const other = (await team()).lead;
    for (let i = 1; i <= 53; i++) {
      await record(db, lead, 'test.done', { type: 'test', id: String(i) }, { number: i });
      if (i % 10 === 0) await record(db, other, 'test.elsewhere', { type: 'test', id: '0' });
    }
    const numbers: unknown[] = [];
    const sizes: number[] = [];
    let next: number | null | undefined;
    do {
      const page = await listRecord(db, lead.teamId, next ?? undefined);
      numbers.push(...page.events.map((event) => event.detail['number']));
      sizes.push(page.events.length);
      next = page.next;
    } while (next !== null);
    expect(sizes).toEqual([25, 25, 3]);
    expect(numbers).toEqual(Array.from({ length: 53 }, (_, i) => 53 - i));
  });
});
