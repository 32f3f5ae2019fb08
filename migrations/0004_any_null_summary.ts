import { type Kysely, sql } from 'kysely';

/** A correction may bring a distribution of its own: its id names the kind. */
export async function up(db: Kysely<unknown>): Promise<void> {
  await sql`
    alter table null_summary drop constraint null_summary_kind_check;
    alter table null_summary add constraint null_summary_kind_check
      check (length(kind) between 1 and 80);
  `.execute(db);
}

export async function down(db: Kysely<unknown>): Promise<void> {
  await sql`
    alter table null_summary drop constraint null_summary_kind_check;
    alter table null_summary add constraint null_summary_kind_check
      check (kind in ('max-statistic', 'cluster-mass'));
  `.execute(db);
}
