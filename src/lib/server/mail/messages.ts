import { formatCount } from '$lib/model/format';
import type { Role } from '$lib/model/role';
import { config } from '../config';
import { layOut } from './layout';
import type { Mail } from './send';

interface Recipient {
  email: string;
  name: string;
}

const link = (path: string): string => new URL(path, config.origin).href;

export function invitationMail(invitation: {
  email: string;
  role: Role;
  teamName: string;
  inviterName: string;
  token: string;
  days: number;
}): Mail {
  const { email, role, teamName, inviterName, token, days } = invitation;
  return {
    to: email,
    subject: `${inviterName} invites you to ${teamName}`,
    ...layOut([
      'Good day,',
      `${inviterName} invites you to work in ${teamName} on Nullwright, as ${role}.`,
      { label: 'Accept the invitation', href: link(`/invitation/${token}`) },
      `The link works once and for ${formatCount(days, 'day')}. If you did not expect it, ignore this mail: nothing happens without you.`,
    ]),
  };
}

export function passwordResetMail(person: Recipient, token: string, hours: number): Mail {
  return {
    to: person.email,
    subject: 'Set a new password for Nullwright',
    ...layOut([
      `Good day ${person.name},`,
      'somebody, most likely you, asked to set a new password for this mail address.',
      { label: 'Set a new password', href: link(`/reset-password/${token}`) },
      `The link works once and for ${formatCount(hours, 'hour')}. If it was not you, ignore this mail: your password stays as it is.`,
    ]),
  };
}

export function passwordChangedMail(person: Recipient): Mail {
  return {
    to: person.email,
    subject: 'Your password for Nullwright was changed',
    ...layOut([
      `Good day ${person.name},`,
      'your password was changed just now, and your other sessions were signed out.',
      'If it was not you, set a new one at once:',
      { label: 'Set a new password', href: link('/reset-password') },
    ]),
  };
}
