import { error, redirect } from '@sveltejs/kit';
import { allow } from '$lib/server/access';
import { chooseTeam } from '$lib/server/accounts/memberships';

/** Which of their teams a person acts for from now on. */
export async function POST(event) {
  allow(event, 'team.read');
  const teamId = (await event.request.formData()).get('team');
  const chosen = event.locals.memberships.find((member) => member.teamId === teamId);
  if (!chosen) error(404, { code: 'not-found', message: 'You belong to no such team.' });
  chooseTeam(event.cookies, chosen.teamId);
  redirect(303, '/studies');
}
