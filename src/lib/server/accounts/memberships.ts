import type { Cookies } from '@sveltejs/kit';
import { config } from '../config';
import type { Db } from '../database';

const teamCookie = 'nullwright_team';

/** Every team of a person, with the role there, by name. */
export async function listMemberships(db: Db, person: App.Person): Promise<App.Member[]> {
  const rows = await db
    .selectFrom('member')
    .innerJoin('team', 'team.id', 'member.teamId')
    .where('member.personId', '=', person.id)
    .select(['team.id as teamId', 'team.name as teamName', 'team.simulated', 'member.role'])
    .orderBy('team.name')
    .orderBy('team.id')
    .execute();
  return rows.map((row) => ({
    personId: person.id,
    personName: person.name,
    teamId: row.teamId,
    teamName: row.teamName,
    teamSimulated: row.simulated,
    role: row.role,
  }));
}

/** The team chosen in the header, as long as the person belongs to it; else the first. */
export function chosenMembership(cookies: Cookies, memberships: App.Member[]): App.Member | null {
  const teamId = cookies.get(teamCookie);
  return memberships.find((member) => member.teamId === teamId) ?? memberships[0] ?? null;
}

export function chooseTeam(cookies: Cookies, teamId: string): void {
  cookies.set(teamCookie, teamId, {
    path: '/',
    httpOnly: true,
    sameSite: 'lax',
    secure: config.origin.startsWith('https:'),
    maxAge: 365 * 24 * 3600,
  });
}
