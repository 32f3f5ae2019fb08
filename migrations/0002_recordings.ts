import { type Kysely, sql } from 'kysely';

export async function up(db: Kysely<unknown>): Promise<void> {
  await sql`
    create table study (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null references team (id),
      name text not null check (length(name) between 1 and 120),
      description text not null default '',
      simulated boolean not null default false,
      created_by uuid not null references person (id),
      created_at timestamptz not null default now(),
      constraint study_team_name_key unique (team_id, name),
      constraint study_team_id_key unique (team_id, id)
    );

    create table participant (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      study_id uuid not null,
      code text not null check (code ~ '^[A-Za-z0-9_-]{1,40}$'),
      created_at timestamptz not null default now(),
      constraint participant_study_code_key unique (study_id, code),
      constraint participant_team_id_key unique (team_id, id),
      foreign key (team_id, study_id) references study (team_id, id) on delete cascade
    );

    create table recording (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      study_id uuid not null,
      participant_id uuid not null,
      name text not null check (length(name) between 1 and 255),
      -- Of the file as stored: what a plan names, and what the browser caches by.
      sha256 char(64) not null,
      -- Of the file with its identifying header fields blanked: recognises the same
      -- recording whether or not those fields were kept.
      content_sha256 char(64) not null,
      size_bytes bigint not null check (size_bytes > 0),
      storage_key text not null,
      format text not null check (format in ('EDF', 'EDF+C', 'EDF+D')),
      -- Wall-clock start as the header states it; EDF has no time zone.
      started_at timestamp,
      duration_s double precision not null,
      record_count integer not null,
      record_duration_s double precision not null,
      -- Stretches without a gap: [{"startS": number, "durationS": number}]
      segments jsonb not null,
      -- What was odd about the file, in words: [{"code": string, "message": string}]
      notices jsonb not null default '[]',
      identification_kept boolean not null default false,
      simulated boolean not null default false,
      uploaded_by uuid not null references person (id),
      created_at timestamptz not null default now(),
      constraint recording_study_content_key unique (study_id, content_sha256),
      constraint recording_team_id_key unique (team_id, id),
      foreign key (team_id, study_id) references study (team_id, id) on delete cascade,
      foreign key (team_id, participant_id) references participant (team_id, id)
    );
    create index recording_study_id_idx on recording (study_id);

    create table channel (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      recording_id uuid not null,
      position integer not null,
      label text not null,
      -- The site the label stands for ("Fc5." is FC5), or the trimmed label itself.
      site text not null,
      type text not null,
      unit text not null,
      sampling_rate_hz double precision not null,
      -- Unit sphere: x to the right ear, y to the nose, z up.
      x double precision,
      y double precision,
      z double precision,
      position_source text check (position_source in ('label', 'electrodes.tsv')),
      bad boolean not null default false,
      constraint channel_recording_position_key unique (recording_id, position),
      foreign key (team_id, recording_id) references recording (team_id, id) on delete cascade
    );

    create table event (
      id bigint generated always as identity primary key,
      team_id uuid not null,
      recording_id uuid not null,
      onset_s double precision not null,
      duration_s double precision,
      label text not null,
      source text not null check (source in ('annotation', 'events.tsv')),
      foreign key (team_id, recording_id) references recording (team_id, id) on delete cascade
    );
    create index event_recording_id_idx on event (recording_id, onset_s);
  `.execute(db);
}

export async function down(db: Kysely<unknown>): Promise<void> {
  await sql`drop table event, channel, recording, participant, study`.execute(db);
}
