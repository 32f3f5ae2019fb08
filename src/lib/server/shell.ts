import { mailPageIsOpen } from './mail';

/** What the header shows: fields chosen by name, for a member or for the signed-out. */
export function shellData({ member, memberships }: App.Locals) {
  return {
    member: member && {
      personId: member.personId,
      personName: member.personName,
      teamId: member.teamId,
      teamName: member.teamName,
      teamSimulated: member.teamSimulated,
      role: member.role,
    },
    teams: memberships.map(({ teamId, teamName, role }) => ({ teamId, teamName, role })),
    mailPageIsOpen,
  };
}
