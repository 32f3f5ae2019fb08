import { migrateToLatest } from '../../scripts/migrate';

/** Server tests talk to a real PostgreSQL; scripts/test.mjs starts one and sets the address. */
export async function setup(): Promise<void> {
  const url = process.env['DATABASE_URL'];
  if (!url) throw new Error('DATABASE_URL is missing: run the tests through `npm test`.');
  await migrateToLatest(url);
}
