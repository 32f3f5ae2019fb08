import { NodePostgresAdapter } from '@lucia-auth/adapter-postgresql';
import { Lucia, TimeSpan } from 'lucia';
import { config } from '../config';
import { pool } from '../database';

declare module 'lucia' {
  interface Register {
    Lucia: typeof lucia;
    UserId: string;
    DatabaseUserAttributes: { email: string; name: string };
  }
}

const adapter = new NodePostgresAdapter(pool, { user: 'person', session: 'session' });

/** Used by sessions.ts only: the one place to change when sessions are kept some other way. */
export const lucia = new Lucia(adapter, {
  sessionExpiresIn: new TimeSpan(14, 'd'),
  sessionCookie: {
    name: 'nullwright_session',
    attributes: { secure: config.origin.startsWith('https:'), sameSite: 'lax' },
  },
  getUserAttributes: ({ email, name }) => ({ email, name }),
});
