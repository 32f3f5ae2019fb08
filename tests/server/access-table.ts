import type { Action } from '$lib/server/access';
import type { World } from './access/world';

/** What of a request is particular to a handler. */
export interface RequestParts {
  params?: Record<string, string>;
  search?: string;
  form?: Record<string, string>;
  json?: unknown;
  body?: BodyInit;
  headers?: Record<string, string>;
}

/** Asks `allow` for this action before anything else. */
interface Guarded {
  action: Action;
  /** A request about the world's things that its lead is not refused. */
  request: (world: World) => RequestParts | Promise<RequestParts>;
  /**
   * The same request by the lead of another team: 404, or (for handlers whose address names
   * nothing of a team) an answer about the asker's own team only.
   */
  otherTeam: 'not-found' | 'own-only';
}

/** For everybody, on purpose. */
interface Open {
  open: string;
}

export type Expectation = Guarded | Open;

const open = (reason: string): Open => ({ open: reason });

/** A handler about things named in its address, form or body. */
const guarded = (action: Action, request: Guarded['request']): Guarded => ({
  action,
  request,
  otherTeam: 'not-found',
});

/** A handler about the asker's own team or account. */
const own = (action: Action, request: Guarded['request'] = () => ({})): Guarded => ({
  action,
  request,
  otherTeam: 'own-only',
});

/**
 * One entry for each server file of src/routes, with one row for each of its handlers: `load`,
 * `actions.name`, or the HTTP method. tests/server/access.test.ts fails for whatever is missing.
 */
export const accessTable: Record<string, Record<string, Expectation>> = {
  '+layout.server.ts': { load: open('tells the chosen theme and nothing else') },
  '+page.server.ts': { load: open('sends everybody on: to the studies or to sign in') },
  'api/health/+server.ts': { GET: open('monitoring has no account; says nothing of any team') },
  'sign-out/+server.ts': { POST: open('ends the session of the cookie it came with, if any') },
  'theme/+server.ts': { POST: open('sets a cookie for light or dark') },

  '(auth)/sign-in/+page.server.ts': {
    load: open('is how people without a session get one'),
    'actions.default': open('is how people without a session get one'),
  },
  '(auth)/reset-password/+page.server.ts': {
    load: open('who forgot the password has no session'),
    'actions.default': open('answers the same whether or not the address has an account'),
  },
  '(auth)/reset-password/[token]/+page.server.ts': {
    load: open('the mailed token is the permission'),
    'actions.default': open('the mailed token is the permission'),
  },
  '(auth)/invitation/[token]/+page.server.ts': {
    load: open('the mailed token is the permission'),
    'actions.create': open('the mailed token is the permission'),
    'actions.join': open('the mailed token is the permission, with the invited account'),
  },
  '(public)/+layout.server.ts': { load: open('shows the asker who they are') },
  '(public)/mail/+page.server.ts': {
    load: open('is 404 wherever a mail could be real; see mail.test.ts'),
  },

  'team-choice/+server.ts': {
    POST: guarded('team.read', (world) => ({ form: { team: world.teamId } })),
  },
  '(app)/+layout.server.ts': { load: own('team.read') },
  '(app)/account/+page.server.ts': {
    load: own('team.read'),
    'actions.name': own('team.read', () => ({ form: { name: 'N. Ewname' } })),
    'actions.password': own('team.read', () => ({
      form: { current: 'not the password', password: 'heron ember lagoon' },
    })),
    'actions.sign-out-others': own('team.read'),
  },
  '(app)/team/+page.server.ts': {
    load: own('team.read'),
    'actions.invite': own('team.manage', () => ({
      form: { email: 'somebody@example.org', role: 'viewer' },
    })),
    'actions.resend': guarded('team.manage', invitation),
    'actions.revoke': guarded('team.manage', invitation),
    'actions.role': guarded('team.manage', ({ members }) => ({
      form: { personId: members.viewer.personId, role: 'statistician' },
    })),
    'actions.remove': guarded('team.manage', ({ members }) => ({
      form: { personId: members.viewer.personId },
    })),
  },
};

function invitation(world: World): RequestParts {
  return { form: { invitationId: world.invitationId } };
}
