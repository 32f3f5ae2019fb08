import { fail } from '@sveltejs/kit';
import { message, setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { changeRoleSchema, invitationSchema, inviteSchema, memberSchema } from '$lib/model/account';
import { allow, may } from '$lib/server/access';
import { listRecord } from '$lib/server/audit';
import { db } from '$lib/server/database';
import {
  invitationDays,
  invite,
  listInvitations,
  resendInvitation,
  revokeInvitation,
} from '$lib/server/invitations';
import { mailPageIsOpen } from '$lib/server/mail';
import { changeRole, listMembers, removeMember } from '$lib/server/members';
import { answerFor, readForm } from './answers';

export async function load(event) {
  const member = allow(event, 'team.read');
  const manages = may(member.role, 'team.manage');
  const before = Number(event.url.searchParams.get('before'));
  const [members, invitations, record, form] = await Promise.all([
    listMembers(db, member.teamId),
    manages ? listInvitations(db, member.teamId) : [],
    listRecord(db, member.teamId, Number.isSafeInteger(before) && before > 0 ? before : undefined),
    superValidate(zod4(inviteSchema)),
  ]);
  return {
    meta: { title: 'Team' },
    manages,
    members,
    invitations,
    record,
    form,
    invitationDays,
    now: new Date(),
    mailPageIsOpen,
  };
}

export const actions = {
  invite: async (event) => {
    const member = allow(event, 'team.manage');
    const form = await superValidate(event.request, zod4(inviteSchema));
    if (!form.valid) return fail(400, { form });
    const outcome = await invite(db, member, form.data);
    if (!outcome.ok) {
      return setError(form, outcome.field as '' | 'email', outcome.message, {
        status: outcome.waitS ? 429 : 400,
      });
    }
    return message(form, `The invitation is on its way to ${form.data.email}.`);
  },

  resend: async (event) => {
    const member = allow(event, 'team.manage');
    const { invitationId } = await readForm(event.request, invitationSchema);
    const outcome = await resendInvitation(db, member, invitationId);
    return answerFor(
      outcome,
      'The invitation is sent again; the link mailed before stops working.',
    );
  },

  revoke: async (event) => {
    const member = allow(event, 'team.manage');
    const { invitationId } = await readForm(event.request, invitationSchema);
    const email = await revokeInvitation(db, member, invitationId);
    return answerFor({ ok: true }, `The invitation for ${email} is withdrawn.`);
  },

  role: async (event) => {
    const member = allow(event, 'team.manage');
    const { personId, role } = await readForm(event.request, changeRoleSchema);
    const outcome = await changeRole(db, member, personId, role);
    return answerFor(outcome, `The role is changed to ${role}.`);
  },

  remove: async (event) => {
    const member = allow(event, 'team.manage');
    const { personId } = await readForm(event.request, memberSchema);
    return answerFor(await removeMember(db, member, personId), 'The member is removed.');
  },
};
