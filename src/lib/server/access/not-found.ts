import { error } from '@sveltejs/kit';

/** A row of another team looks exactly like one that does not exist. */
export function notFound(what: string): never {
  error(404, { code: 'not-found', message: `There is no such ${what} in your team.` });
}
