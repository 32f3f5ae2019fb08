import { promises as fs } from 'node:fs';
import path from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { FileMigrationProvider, Migrator } from 'kysely';
import { connect } from '../src/lib/server/database/connect';

const migrationFolder = fileURLToPath(new URL('../migrations', import.meta.url));

/** Brings the database to the newest migration; throws the first error, loudly. */
export async function migrateToLatest(databaseUrl: string): Promise<string[]> {
  const { db } = connect(databaseUrl);
  try {
    const provider = new FileMigrationProvider({ fs, path, migrationFolder });
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
