import { error, redirect } from '@sveltejs/kit';
import { may, type Action } from './permissions';

export { may, type Action } from './permissions';

/** Who acts, and in which team: what every repository function is scoped by. */
export type Member = App.Member;

/**
 * The one question every load, action and endpoint asks first. Rows of other teams are not
 * this function's business: repositories look only inside `member.teamId`, so they are 404.
 * Throws 401 (pages: a redirect to sign-in) for the signed-out and 403 for the wrong role.
 */
export function allow(event: { locals: App.Locals; url: URL }, action: Action): Member {
  const { member, person } = event.locals;
  if (!person) {
    if (event.url.pathname.startsWith('/api/')) {
      error(401, { code: 'signed-out', message: 'Sign in first.' });
    }
    const next = event.url.pathname + event.url.search;
    redirect(303, `/sign-in?next=${encodeURIComponent(next)}`);
  }
  if (!member) {
    error(403, {
      code: 'no-team',
      message: 'You belong to no team yet. Ask a lab lead to invite you.',
    });
  }
  if (!may(member.role, action)) {
    error(403, {
      code: 'wrong-role',
      message: `Your role (${member.role}) does not allow this. Ask a lab lead of ${member.teamName}.`,
    });
  }
  return member;
}
