import { randomUUID } from 'node:crypto';
import { afterAll, describe, expect, it } from 'vitest';
import type { Role } from '$lib/model/role';
import { checkSignIn } from '$lib/server/accounts';
import { db } from '$lib/server/database';
import {
  acceptAsNew,
  acceptAsPerson,
  findInvitation,
  invite,
  listInvitations,
  resendInvitation,
  revokeInvitation,
} from '$lib/server/invitations';
import { atOnce, goodPassword, mailsTo, makePerson, makeTeam, tokenIn } from '../accounts/fixture';

afterAll(() => db.destroy());

const newEmail = () => `${randomUUID()}@example.org`;
const joining = { name: 'Nia Newcome', password: goodPassword };

async function invited(email = newEmail(), role: Role = 'researcher') {
  const lead = await makeTeam(await makePerson());
  expect(await invite(db, lead, { email, role })).toEqual({ ok: true });
  const token = tokenIn((await mailsTo(email))[0]);
  const [open] = await listInvitations(db, lead.teamId);
  return { lead, email, token, id: open!.id };
}

const roleIn = async (teamId: string, personId: string) =>
  (
    await db
      .selectFrom('member')
      .select('role')
      .where('teamId', '=', teamId)
      .where('personId', '=', personId)
      .executeTakeFirst()
  )?.role;

const actionsIn = async (teamId: string) =>
  (
    await db
      .selectFrom('auditEvent')
      .select('action')
      .where('teamId', '=', teamId)
      .orderBy('id')
      .execute()
  ).map((event) => event.action);

describe('an invitation', () => {
  it('makes an account for the invited address, with the role, and is recorded', async () => {
    const { lead, email, token } = await invited();
    const accepted = await acceptAsNew(db, token, joining);
    if (!accepted.ok) throw new Error(accepted.message);
    expect(await roleIn(lead.teamId, accepted.personId)).toBe('researcher');
    const signIn = await checkSignIn(db, email, goodPassword, `test-${randomUUID()}`);
    expect(signIn).toEqual({ ok: true, personId: accepted.personId });
    expect(await actionsIn(lead.teamId)).toEqual(['invitation.sent', 'invitation.accepted']);
    expect(await listInvitations(db, lead.teamId)).toEqual([]);
  });

  it('joins the account that is there, without a second one', async () => {
    const person = await makePerson();
    const { lead, token } = await invited(person.email, 'viewer');
    expect((await acceptAsNew(db, token, joining)).ok).toBe(false);
    expect((await acceptAsPerson(db, token, person)).ok).toBe(true);
    expect(await roleIn(lead.teamId, person.id)).toBe('viewer');
  });

  it('is only for the invited address, whoever has the link', async () => {
    const { lead, token } = await invited();
    const finder = await makePerson();
    const outcome = await acceptAsPerson(db, token, finder);
    expect(outcome).toMatchObject({ ok: false });
    expect(await roleIn(lead.teamId, finder.id)).toBeUndefined();
    expect(await findInvitation(db, token)).toBeDefined();
  });

  it('works once, also when the link is used many times at once', async () => {
    const person = await makePerson();
    const { token } = await invited(person.email);
    const outcomes = await atOnce(() => acceptAsPerson(db, token, person));
    expect(outcomes.filter((outcome) => outcome.ok)).toHaveLength(1);
  });

  it('keeps working when the password is too easy', async () => {
    const { token } = await invited();
    const easy = { ...joining, password: 'nianewcome2024' };
    expect(await acceptAsNew(db, token, easy)).toMatchObject({ ok: false, field: 'password' });
    expect((await acceptAsNew(db, token, joining)).ok).toBe(true);
  });

  it('ends when it is withdrawn, too old, sent again, or replaced by a new one', async () => {
    const withdrawn = await invited();
    await revokeInvitation(db, withdrawn.lead, withdrawn.id);
    expect((await acceptAsNew(db, withdrawn.token, joining)).ok).toBe(false);

    const old = await invited();
    await db
      .updateTable('invitation')
      .set({ expiresAt: new Date(Date.now() - 1000) })
      .where('id', '=', old.id)
      .execute();
    expect((await acceptAsNew(db, old.token, joining)).ok).toBe(false);

    const again = await invited();
    await resendInvitation(db, again.lead, again.id);
    const resent = tokenIn((await mailsTo(again.email))[0]);
    expect(resent).not.toBe(again.token);
    expect((await acceptAsNew(db, again.token, joining)).ok).toBe(false);
    expect((await acceptAsNew(db, resent, joining)).ok).toBe(true);

    const replaced = await invited();
    await invite(db, replaced.lead, { email: replaced.email, role: 'viewer' });
    expect((await acceptAsNew(db, replaced.token, joining)).ok).toBe(false);
    expect(await listInvitations(db, replaced.lead.teamId)).toHaveLength(1);
  });

  it('cannot be withdrawn or sent again by another team', async () => {
    const { id, token } = await invited();
    const stranger = await makeTeam(await makePerson());
    await expect(revokeInvitation(db, stranger, id)).rejects.toMatchObject({ status: 404 });
    await expect(resendInvitation(db, stranger, id)).rejects.toMatchObject({ status: 404 });
    expect(await findInvitation(db, token)).toBeDefined();
  });

  it('is refused for somebody who is a member', async () => {
    const person = await makePerson();
    const lead = await makeTeam(person);
    const outcome = await invite(db, lead, { email: person.email, role: 'viewer' });
    expect(outcome).toMatchObject({ ok: false, field: 'email' });
  });

  it('keeps no token in the database', async () => {
    const { id, token } = await invited();
    const row = await db
      .selectFrom('invitation')
      .selectAll()
      .where('id', '=', id)
      .executeTakeFirstOrThrow();
    expect(JSON.stringify(row)).not.toContain(token);
  });
});
