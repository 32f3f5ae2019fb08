import { json } from '@sveltejs/kit';
import { sql } from 'kysely';
import { db } from '$lib/server/database';
import { log } from '$lib/server/log';
import { engineVersion } from '$workers/engine/version';

/** For whoever watches the server: 200 while it can do its work, 503 while the database is away. */
export async function GET() {
  const headers = { 'Cache-Control': 'no-store' };
  try {
    await sql`select 1`.execute(db);
    return json({ status: 'ok', database: 'ok', engine: engineVersion }, { headers });
  } catch (err) {
    log.error({ err }, 'health check: database does not answer');
    return json({ status: 'failing', database: 'unreachable' }, { status: 503, headers });
  }
}
