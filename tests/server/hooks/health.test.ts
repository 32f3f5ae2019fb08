import { afterAll, describe, expect, it } from 'vitest';
import { GET } from '../../../src/routes/api/health/+server';
import { connect } from '$lib/server/database/connect';
import { db } from '$lib/server/database';
import { checkHealth } from '$lib/server/health';

afterAll(() => db.destroy());

describe('the health check', () => {
  it('is 200 and ok while the database answers, and is never cached', async () => {
    const response = await GET();
    expect(response.status).toBe(200);
    expect(response.headers.get('cache-control')).toBe('no-store');
    expect(await response.json()).toMatchObject({ status: 'ok', database: 'ok' });
  });

  it('is failing while the database is away, and tells no address', async () => {
    // Port 1 of loopback: nothing listens there.
    const away = connect('postgres://nobody@127.0.0.1:1/none').db;
    const health = await checkHealth(away);
    expect(health).toMatchObject({ status: 'failing', database: 'unreachable' });
    expect(JSON.stringify(health)).not.toContain('127.0.0.1');
    await away.destroy();
  });
});
