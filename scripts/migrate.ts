import { readdir } from 'node:fs/promises';
import { pathToFileURL } from 'node:url';
import { type Migration, type MigrationProvider, Migrator } from 'kysely';
import { connect } from '../src/lib/server/database/connect';

const migrationFolder = new URL('../migrations/', import.meta.url);

// Imported from here, not from inside the package, so that whatever runs this file (tsx, Vitest)
// also reads the migrations' TypeScript.
const provider: MigrationProvider = {
  async getMigrations() {
    const names = (await readdir(migrationFolder)).filter((name) => name.endsWith('.ts')).sort();
    const entries = names.map(async (name): Promise<[string, Migration]> => {
      const address = new URL(name, migrationFolder).href;
      return [name.slice(0, -3), (await import(/* @vite-ignore */ address)) as Migration];
    });
    return Object.fromEntries(await Promise.all(entries));
  },
};

/** Brings the database to the newest migration; throws the first error, loudly. */
export async function migrateToLatest(databaseUrl: string): Promise<string[]> {
  const { db } = connect(databaseUrl);
  try {
    const { error, results } = await new Migrator({ db, provider }).migrateToLatest();
    if (error) throw error instanceof Error ? error : new Error(String(error));
    return (results ?? []).map((result) => result.migrationName);
  } finally {
    await db.destroy();
  }
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  const url = process.env['DATABASE_URL'];
  if (!url) throw new Error('DATABASE_URL is missing; scripts/start.mjs sets it.');
  const done = await migrateToLatest(url);
  console.log(done.length ? `migrated: ${done.join(', ')}` : 'database is up to date');
}
