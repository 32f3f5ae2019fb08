/** Makes the database an address names, if it is missing; `fresh` drops what was there. */
export async function ensureDatabase(postgres, name, { fresh = false } = {}) {
  // Imported here: the packages may have been installed a moment ago.
  const { default: pg } = await import('pg');
  const client = new pg.Client({ connectionString: postgres.address('postgres') });
  await client.connect();
  try {
    if (fresh) await client.query(`drop database if exists ${name} with (force)`);
    const found = await client.query('select 1 from pg_database where datname = $1', [name]);
    if (found.rowCount === 0) await client.query(`create database ${name}`);
  } finally {
    await client.end();
  }
  return postgres.address(name);
}
