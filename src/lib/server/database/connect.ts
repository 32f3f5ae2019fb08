import { CamelCasePlugin, Kysely, PostgresDialect } from 'kysely';
import pg from 'pg';
import type { Database } from './tables';

// bigint and numeric arrive as text by default; every such column here fits a double exactly
// (byte sizes, identity numbers, counts).
pg.types.setTypeParser(pg.types.builtins.INT8, Number);
pg.types.setTypeParser(pg.types.builtins.NUMERIC, Number);
// A recording's wall-clock start has no zone: keep the text as it stands.
pg.types.setTypeParser(pg.types.builtins.TIMESTAMP, (text) => text.replace(' ', 'T'));

export type Db = Kysely<Database>;

/** Opens a pool and the query builder over it; `db.destroy()` closes both. */
export function connect(databaseUrl: string): { db: Db; pool: pg.Pool } {
  const pool = new pg.Pool({ connectionString: databaseUrl, max: 10 });
  const db = new Kysely<Database>({
    dialect: new PostgresDialect({ pool }),
    plugins: [
      new CamelCasePlugin({
        maintainNestedObjectKeys: true,
        // lagARad is lag_a_rad, adjustedPLow is adjusted_p_low.
        underscoreBetweenUppercaseLetters: true,
      }),
    ],
  });
  return { db, pool };
}
