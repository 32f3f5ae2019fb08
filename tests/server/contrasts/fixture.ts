import { randomBytes, randomUUID } from 'node:crypto';
import { sql } from 'kysely';
import { connect, type Db } from '$lib/server/database/connect';
import type { Member } from '$lib/server/access';
import type { Role } from '$lib/model/role';

export function openDatabase(): Db {
  const url = process.env['DATABASE_URL'];
  if (!url) throw new Error('DATABASE_URL is missing: run the tests through `npm test`.');
  return connect(url).db;
}

/** A new team with one member: every test works on its own rows. */
export async function makeMember(db: Db, role: Role = 'researcher'): Promise<Member> {
  const team = await db
    .insertInto('team')
    .values({ name: 'Test laboratory' })
    .returning(['id', 'name'])
    .executeTakeFirstOrThrow();
  return makeColleague(db, team.id, role);
}

export async function makeColleague(db: Db, teamId: string, role: Role): Promise<Member> {
  const person = await db
    .insertInto('person')
    .values({ email: `${randomUUID()}@example.org`, name: 'T. Ester', passwordHash: 'none' })
    .returning(['id', 'name'])
    .executeTakeFirstOrThrow();
  await db.insertInto('member').values({ teamId, personId: person.id, role }).execute();
  return {
    personId: person.id,
    personName: person.name,
    teamId,
    teamName: 'Test laboratory',
    teamSimulated: false,
    role,
  };
}

export async function makeStudy(db: Db, member: Member): Promise<string> {
  const study = await db
    .insertInto('study')
    .values({ teamId: member.teamId, name: randomUUID(), createdBy: member.personId })
    .returning('id')
    .executeTakeFirstOrThrow();
  return study.id;
}

export interface RecordingSpec {
  participant?: string;
  sites?: string[];
  samplingRateHz?: number;
  durationS?: number;
  events?: { onsetS: number; label: string }[];
}

async function participantId(db: Db, member: Member, studyId: string, code: string) {
  const owner = { teamId: member.teamId, studyId };
  const found = await db
    .selectFrom('participant')
    .select('id')
    .where('studyId', '=', studyId)
    .where('code', '=', code)
    .executeTakeFirst();
  if (found) return found.id;
  const made = await db
    .insertInto('participant')
    .values({ ...owner, code })
    .returning('id')
    .executeTakeFirstOrThrow();
  return made.id;
}

/** A recording's rows (no file stands behind them) and its SHA-256. */
export async function makeRecording(
  db: Db,
  member: Member,
  studyId: string,
  spec: RecordingSpec = {},
): Promise<{ id: string; sha256: string; name: string }> {
  const sha256 = randomBytes(32).toString('hex');
  const durationS = spec.durationS ?? 120;
  const name = `${sha256.slice(0, 8)}.edf`;
  const recording = await db
    .insertInto('recording')
    .values({
      teamId: member.teamId,
      studyId,
      participantId: await participantId(db, member, studyId, spec.participant ?? 'P01'),
      name,
      sha256,
      contentSha256: sha256,
      sizeBytes: 1000,
      storageKey: `recordings/${sha256}`,
      format: 'EDF+C',
      startedAt: null,
      durationS,
      recordCount: durationS,
      recordDurationS: 1,
      segments: JSON.stringify([{ startS: 0, durationS }]),
      notices: JSON.stringify([]),
      uploadedBy: member.personId,
    })
    .returning('id')
    .executeTakeFirstOrThrow();
  const owner = { teamId: member.teamId, recordingId: recording.id };
  const channels = (spec.sites ?? ['C3', 'C4', 'P3', 'P4']).map((site, position) => ({
    ...owner,
    position,
    label: `${site}..`,
    site,
    type: 'EEG',
    unit: 'uV',
    samplingRateHz: spec.samplingRateHz ?? 160,
    x: null,
    y: null,
    z: null,
    positionSource: null,
  }));
  await db.insertInto('channel').values(channels).execute();
  const events = (spec.events ?? []).map((event) => ({
    ...owner,
    ...event,
    durationS: null,
    source: 'annotation' as const,
  }));
  if (events.length) await db.insertInto('event').values(events).execute();
  return { id: recording.id, sha256, name };
}

/** Waits until a session of this database waits for a row, or `work` is done without waiting. */
export async function waitsForRow(db: Db, work: Promise<unknown>): Promise<boolean> {
  let done = false;
  void work.finally(() => (done = true)).catch(() => undefined);
  for (;;) {
    const { rows } = await sql`
      select from pg_stat_activity
      where datname = current_database() and wait_event_type = 'Lock'
    `.execute(db);
    if (rows.length > 0) return true;
    if (done) return false;
  }
}
