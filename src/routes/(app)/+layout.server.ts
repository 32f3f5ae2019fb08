import { allow } from '$lib/server/access';
import { mailPageIsOpen } from '$lib/server/mail';

// No barrier: every load, action and endpoint below asks for itself.
export function load(event) {
  const member = allow(event, 'team.read');
  return {
    member: {
      personId: member.personId,
      personName: member.personName,
      teamId: member.teamId,
      teamName: member.teamName,
      teamSimulated: member.teamSimulated,
      role: member.role,
    },
    teams: event.locals.memberships.map(({ teamId, teamName, role }) => ({
      teamId,
      teamName,
      role,
    })),
    mailPageIsOpen,
  };
}
