import { error } from '@sveltejs/kit';
import { listKeptMails, mailPageIsOpen } from '$lib/server/mail';

/** Open to everybody, since who resets a password is signed out; only where no mail is real. */
export async function load() {
  if (!mailPageIsOpen) error(404, { code: 'not-found', message: 'There is no such page.' });
  return { meta: { title: 'Kept mail' }, mails: await listKeptMails() };
}
