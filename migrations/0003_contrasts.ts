import { type Kysely, sql } from 'kysely';

export async function up(db: Kysely<unknown>): Promise<void> {
  await sql`
    create table contrast (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      study_id uuid not null,
      name text not null check (length(name) between 1 and 120),
      created_by uuid not null references person (id),
      created_at timestamptz not null default now(),
      constraint contrast_study_name_key unique (study_id, name),
      constraint contrast_team_id_key unique (team_id, id),
      foreign key (team_id, study_id) references study (team_id, id)
    );

    create table plan (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      contrast_id uuid not null,
      version integer not null check (version >= 1),
      -- A draft may be incomplete; a locked body satisfies the plan schema.
      body jsonb not null,
      hash char(64),
      -- Why this version replaces the one before it; the first needs none.
      reason text,
      locked_at timestamptz,
      locked_by uuid references person (id),
      created_by uuid not null references person (id),
      created_at timestamptz not null default now(),
      -- Counts the saves of a draft: a save that was based on an older one is refused.
      revision integer not null default 0,
      updated_at timestamptz not null default now(),
      updated_by uuid references person (id),
      constraint plan_contrast_version_key unique (contrast_id, version),
      constraint plan_team_id_key unique (team_id, id),
      constraint plan_locked_whole check (
        (locked_at is null) = (hash is null) and (locked_at is null) = (locked_by is null)
      ),
      constraint plan_reason_given check (version = 1 or locked_at is null or length(reason) > 0),
      foreign key (team_id, contrast_id) references contrast (team_id, id)
    );
    create unique index plan_one_draft_idx on plan (contrast_id) where locked_at is null;

    create function refuse_locked_plan() returns trigger language plpgsql as $$
    begin
      if old.locked_at is not null then
        raise exception 'plan % is locked and cannot change', old.id
          using errcode = 'integrity_constraint_violation';
      end if;
      if tg_op = 'DELETE' then return old; end if;
      return new;
    end $$;
    create trigger plan_immutable before update or delete on plan
      for each row execute function refuse_locked_plan();

    create table run (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      plan_id uuid not null,
      state text not null check (state in ('running', 'paused', 'stopped', 'failed', 'finished')),
      seed text not null,
      engine_version text not null,
      worker_count integer not null check (worker_count >= 1),
      -- Share of the work done, 0 to 1.
      progress double precision not null default 0 check (progress between 0 and 1),
      digest char(64),
      -- Epoch counts, losses by reason, tests, timings: what the summary line shows.
      facts jsonb not null default '{}',
      failure text,
      started_by uuid not null references person (id),
      started_at timestamptz not null default now(),
      -- The browser's last word of it: an old one means that its page was closed.
      heard_at timestamptz not null default now(),
      finished_at timestamptz,
      constraint run_team_id_key unique (team_id, id),
      constraint run_finished_whole check (
        (state = 'finished') = (digest is not null) and (state = 'finished') = (finished_at is not null)
      ),
      foreign key (team_id, plan_id) references plan (team_id, id)
    );
    create index run_plan_id_idx on run (plan_id);

    create function refuse_finished_run() returns trigger language plpgsql as $$
    begin
      if old.state = 'finished' then
        raise exception 'run % is finished and cannot change', old.id
          using errcode = 'integrity_constraint_violation';
      end if;
      if tg_op = 'DELETE' then return old; end if;
      return new;
    end $$;
    create trigger run_immutable before update or delete on run
      for each row execute function refuse_finished_run();

    -- One distribution of maxima over all features, in order of permutation number.
    create table null_summary (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      run_id uuid not null,
      kind text not null check (kind in ('max-statistic', 'cluster-mass')),
      surrogates double precision[] not null,
      mean double precision not null,
      sd double precision not null,
      -- The smallest value that passes; null where the permutations are too few for any.
      critical_value double precision,
      constraint null_summary_run_kind_key unique (run_id, kind),
      foreign key (team_id, run_id) references run (team_id, id)
    );

    create table cluster (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      run_id uuid not null,
      -- Number within the run, 1 is the largest mass.
      number integer not null,
      site_j text not null,
      site_k text not null,
      sign smallint not null check (sign in (-1, 1)),
      mass double precision not null,
      size integer not null check (size >= 1),
      -- Indices into the pair's frequency-by-time map, f * timeCount + t.
      points integer[] not null,
      exceedances integer not null check (exceedances >= 0),
      p double precision not null check (p > 0 and p <= 1),
      constraint cluster_run_number_key unique (run_id, number),
      constraint cluster_run_id_key unique (run_id, id),
      foreign key (team_id, run_id) references run (team_id, id)
    );

    create table edge (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      run_id uuid not null,
      correction text not null,
      pair_index integer not null,
      site_j text not null,
      site_k text not null,
      from_hz double precision not null,
      to_hz double precision not null,
      from_s double precision not null,
      to_s double precision not null,
      peak_hz double precision not null,
      peak_s double precision not null,
      peak_point integer not null,
      points integer not null,
      observed_a double precision not null,
      observed_b double precision not null,
      difference double precision not null,
      z double precision not null,
      p double precision not null check (p > 0 and p <= 1),
      p_low double precision not null,
      p_high double precision not null,
      adjusted_p double precision not null check (adjusted_p > 0 and adjusted_p <= 1),
      adjusted_p_low double precision,
      adjusted_p_high double precision,
      lag_a_rad double precision not null,
      lag_b_rad double precision not null,
      cluster_id uuid,
      foreign key (team_id, run_id) references run (team_id, id),
      foreign key (run_id, cluster_id) references cluster (run_id, id)
    );
    create index edge_run_id_idx on edge (run_id, correction, adjusted_p);

    create table stored_map (
      id uuid primary key default gen_random_uuid(),
      team_id uuid not null,
      run_id uuid not null,
      name text not null,
      storage_key text not null,
      sha256 char(64) not null,
      size_bytes bigint not null,
      dtype text not null,
      shape integer[] not null,
      constraint stored_map_run_name_key unique (run_id, name),
      foreign key (team_id, run_id) references run (team_id, id)
    );

    -- What a finished run found is as immutable as the run itself.
    create function refuse_finished_part() returns trigger language plpgsql as $$
    declare
      part_of uuid := case when tg_op = 'INSERT' then new.run_id else old.run_id end;
    begin
      if exists (select from run where id = part_of and state = 'finished') then
        raise exception '% of run % is finished and cannot change', tg_table_name, part_of
          using errcode = 'integrity_constraint_violation';
      end if;
      if tg_op = 'DELETE' then return old; end if;
      return new;
    end $$;
    create trigger null_summary_immutable before insert or update or delete on null_summary
      for each row execute function refuse_finished_part();
    create trigger cluster_immutable before insert or update or delete on cluster
      for each row execute function refuse_finished_part();
    create trigger edge_immutable before insert or update or delete on edge
      for each row execute function refuse_finished_part();
    create trigger stored_map_immutable before insert or update or delete on stored_map
      for each row execute function refuse_finished_part();
  `.execute(db);
}

export async function down(db: Kysely<unknown>): Promise<void> {
  await sql`
    drop table stored_map, edge, cluster, null_summary, run, plan, contrast;
    drop function refuse_finished_part();
    drop function refuse_finished_run();
    drop function refuse_locked_plan();
  `.execute(db);
}
