import { readdir } from 'node:fs/promises';
import { pathToFileURL } from 'node:url';
import { type Migration, type MigrationProvider, Migrator, sql } from 'kysely';
import { readConfig } from '../src/lib/server/config-schema';
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

/** @throws Error naming the server that does not answer, without its password, and the remedy. */
export async function reach(databaseUrl: string): Promise<void> {
  const { db } = connect(databaseUrl);
  try {
    await sql`select 1`.execute(db);
  } catch (problem) {
    const { message, code } = problem as Error & { code?: string };
    const where = new URL(databaseUrl);
    throw new Error(
      `The database ${where.pathname.slice(1)} at ${where.host} cannot be used: ${message || code}. Check DATABASE_URL.`,
      { cause: problem },
    );
  } finally {
    await db.destroy();
  }
}

/** The first step of each start that runs the application's own code: it also checks what is set. */
async function main(): Promise<void> {
  const { databaseUrl } = readConfig(process.env);
  await reach(databaseUrl);
  const done = await migrateToLatest(databaseUrl);
  console.log(done.length ? `migrated: ${done.join(', ')}` : 'database is up to date');
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  await main().catch((problem: unknown) => {
    // What somebody set is theirs to mend; a stack would bury the sentence that says so.
    console.error(problem instanceof Error ? problem.message : problem);
    process.exitCode = 1;
  });
}
