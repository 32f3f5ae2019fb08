import { sql } from 'kysely';
import { db } from '$lib/server/database';

/**
 * One hash over every row of a team in all tables that have a team, and over its people and their
 * sessions: equal when nothing changed.
 */
export async function fingerprint(teamId: string): Promise<string> {
  const tables = await teamTables();
  const parts = tables.map(
    (table) => sql`
      select ${sql.lit(table)} || coalesce(string_agg(md5(t::text), '' order by md5(t::text)), '')
      from ${sql.table(table)} t where t.team_id = ${teamId}`,
  );
  const people = sql`(select person_id from member where team_id = ${teamId})`;
  parts.push(
    sql`select string_agg(md5(t::text), '' order by id) from person t where id in ${people}`,
    sql`select string_agg(md5(t::text), '' order by id) from session t where user_id in ${people}`,
  );
  const { rows } = await sql<{ hash: string }>`
    select md5(string_agg(part, ' ' order by part)) as hash
    from (${sql.join(parts, sql` union all `)}) as parts (part)`.execute(db);
  return rows[0]!.hash;
}

async function teamTables(): Promise<string[]> {
  const { rows } = await sql<{ name: string }>`
    select table_name as name from information_schema.columns
    where table_schema = 'public' and column_name = 'team_id' order by 1`.execute(db);
  return rows.map((row) => row.name);
}
