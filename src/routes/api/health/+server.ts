import { json } from '@sveltejs/kit';
import { db } from '$lib/server/database';
import { checkHealth } from '$lib/server/health';

/** For whoever watches the server: 200 while it can do its work, 503 while the database is away. */
export async function GET() {
  const health = await checkHealth(db);
  const status = health.status === 'ok' ? 200 : 503;
  return json(health, { status, headers: { 'Cache-Control': 'no-store' } });
}
