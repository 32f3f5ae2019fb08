import { fail } from '@sveltejs/kit';
import { message, setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { changePasswordSchema, nameSchema } from '$lib/model/account';
import { allow } from '$lib/server/access';
import {
  changePassword,
  countOtherSessions,
  renamePerson,
  revokeSessions,
  waitMessage,
} from '$lib/server/accounts';
import { db } from '$lib/server/database';

export async function load(event) {
  const member = allow(event, 'team.read');
  const { person, sessionId, memberships } = event.locals;
  const [nameForm, passwordForm, otherSessions] = await Promise.all([
    superValidate({ name: member.personName }, zod4(nameSchema), { id: 'name' }),
    superValidate(zod4(changePasswordSchema), { id: 'password' }),
    countOtherSessions(member.personId, sessionId ?? ''),
  ]);
  return {
    meta: { title: 'Your account' },
    email: person?.email ?? '',
    teams: memberships.map(({ teamId, teamName, role }) => ({ teamId, teamName, role })),
    nameForm,
    passwordForm,
    otherSessions,
  };
}

export const actions = {
  name: async (event) => {
    const member = allow(event, 'team.read');
    const form = await superValidate(event.request, zod4(nameSchema), { id: 'name' });
    if (!form.valid) return fail(400, { form });
    await renamePerson(db, member.personId, form.data.name);
    return message(form, 'Your name is changed.');
  },

  password: async (event) => {
    const member = allow(event, 'team.read');
    const form = await superValidate(event.request, zod4(changePasswordSchema), { id: 'password' });
    const { current, password: next } = form.data;
    form.data.current = '';
    form.data.password = '';
    if (!form.valid) return fail(400, { form });
    const sessionId = event.locals.sessionId ?? '';
    const outcome = await changePassword(db, member.personId, sessionId, { current, next });
    if (!outcome.ok) {
      const text = outcome.waitS ? waitMessage(outcome.waitS) : outcome.message;
      return setError(form, outcome.field as 'current' | 'password', text, {
        status: outcome.waitS ? 429 : 400,
      });
    }
    return message(form, 'Your password is changed, and your other sessions are signed out.');
  },

  'sign-out-others': async (event) => {
    const member = allow(event, 'team.read');
    await revokeSessions(member.personId, event.locals.sessionId ?? '');
    return { signedOut: true };
  },
};
