import { type Kysely, sql } from 'kysely';

export async function up(db: Kysely<unknown>): Promise<void> {
  await sql`
    create table person (
      id uuid primary key default gen_random_uuid(),
      email text not null check (email = lower(email)),
      name text not null check (length(name) between 1 and 120),
      password_hash text not null,
      created_at timestamptz not null default now(),
      constraint person_email_key unique (email)
    );

    create table session (
      id text primary key,
      user_id uuid not null references person (id) on delete cascade,
      expires_at timestamptz not null
    );
    create index session_user_id_idx on session (user_id);

    create table team (
      id uuid primary key default gen_random_uuid(),
      name text not null check (length(name) between 1 and 120),
      simulated boolean not null default false,
      created_at timestamptz not null default now()
    );

    create table member (
      team_id uuid not null references team (id) on delete cascade,
      person_id uuid not null references person (id) on delete cascade,
      role text not null check (role in ('lead', 'researcher', 'statistician', 'viewer')),
      created_at timestamptz not null default now(),
      primary key (team_id, person_id)
    );
    create index member_person_id_idx on member (person_id);

    -- Only hashes of tokens are kept: a copy of the database opens no door.
    create table invitation (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null references team (id) on delete cascade,
      email text not null check (email = lower(email)),
      role text not null check (role in ('lead', 'researcher', 'statistician', 'viewer')),
      token_hash text not null,
      invited_by uuid not null references person (id),
      created_at timestamptz not null default now(),
      expires_at timestamptz not null,
      accepted_at timestamptz,
      revoked_at timestamptz,
      constraint invitation_token_hash_key unique (token_hash)
    );
    create index invitation_team_id_idx on invitation (team_id);

    create table password_reset (
      id uuid primary key default gen_random_uuid(),
      person_id uuid not null references person (id) on delete cascade,
      token_hash text not null,
      created_at timestamptz not null default now(),
      expires_at timestamptz not null,
      used_at timestamptz,
      constraint password_reset_token_hash_key unique (token_hash)
    );
    create index password_reset_person_id_idx on password_reset (person_id);

    -- The shape that rate-limiter-flexible expects of its PostgreSQL store.
    create table rate_limit (
      key varchar(255) primary key,
      points integer not null default 0,
      expire bigint
    );

    create function refuse_change() returns trigger language plpgsql as $$
    begin
      raise exception '% rows are append-only', tg_table_name
        using errcode = 'integrity_constraint_violation';
    end $$;

    create table audit_event (
      id bigint generated always as identity primary key,
      team_id uuid not null references team (id),
      person_id uuid references person (id),
      action text not null,
      subject_type text not null,
      subject_id text not null,
      detail jsonb not null default '{}',
      created_at timestamptz not null default now()
    );
    create index audit_event_team_id_idx on audit_event (team_id, created_at desc);
    create index audit_event_subject_idx on audit_event (team_id, subject_type, subject_id);
    create trigger audit_event_append_only before update or delete on audit_event
      for each row execute function refuse_change();
  `.execute(db);
}

export async function down(db: Kysely<unknown>): Promise<void> {
  await sql`
    drop table audit_event, rate_limit, password_reset, invitation, member, team, session, person;
    drop function refuse_change();
  `.execute(db);
}
