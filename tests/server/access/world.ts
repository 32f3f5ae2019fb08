import { randomUUID } from 'node:crypto';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { buffer } from 'node:stream/consumers';
import { bytesOf, engineVersion } from '$engine';
import { roles, type Role } from '$lib/model/role';
import type { Member } from '$lib/server/access';
import { hashPassword, hashToken, newToken, startSession } from '$lib/server/accounts';
import { createContrast, getPlanBody, saveDraft } from '$lib/server/contrasts';
import { db } from '$lib/server/database';
import { ingestRecording, recordingFacts } from '$lib/server/recordings';
import { createRun, storeResult } from '$lib/server/runs';
import { storage } from '$lib/server/storage';
import { runHeadless, type HeadlessResult } from '$workers/headless';
import { smallPlan, smallRecording } from '../../engine/run/small-run';
import { makeColleague, makeMember, makeRecording, makeStudy } from '../contrasts/fixture';
import { tappingEvents, validDraft } from '../contrasts/valid-draft';
import { lockedContrast } from '../runs/laboratory';
import { CookieJar } from './cookie-jar';

/** Somebody with a session; a person without a team has no member. */
export interface Actor {
  personId: string;
  cookies: CookieJar;
}

/**
 * A team with everything in it, its members, and people who must not see any of it. Rows of the
 * table build their requests from the ids here.
 */
export interface World {
  members: Record<Role, Member>;
  actors: Record<Role, Actor>;
  /** The lead of another team, who may do everything there. */
  stranger: Actor;
  /** Has an account and belongs to no team. */
  loner: Actor;
  teamId: string;
  studyId: string;
  participantId: string;
  recording: { id: string; sha256: string; participantId: string; storageKey: string };
  /** A contrast with an unlocked plan, saved once, that is ready to be locked. */
  draftContrastId: string;
  /** The recording that the draft names. */
  draftedSha256: string;
  /** A contrast with a locked plan and a run under way. */
  contrastId: string;
  planHash: string;
  runId: string;
  invitationId: string;
  /** Ids that must never appear in an answer to another team. */
  secrets: string[];
}

export async function makeWorld(): Promise<World> {
  const lead = await makeMember(db, 'lead');
  const colleagues = roles.filter((role) => role !== 'lead');
  const others = await Promise.all(
    colleagues.map(async (role) => [role, await makeColleague(db, lead.teamId, role)] as const),
  );
  const members = { lead, ...Object.fromEntries(others) } as Record<Role, Member>;
  const actors = Object.fromEntries(
    await Promise.all(roles.map(async (role) => [role, await actorOf(members[role].personId)])),
  ) as Record<Role, Actor>;
  const data = await makeData(members.lead);
  const { teamId } = lead;
  return {
    members,
    actors,
    stranger: await actorOf((await makeMember(db, 'lead')).personId),
    loner: await actorOf(await makePerson()),
    teamId,
    ...data,
    secrets: [
      teamId,
      data.studyId,
      data.participantId,
      data.recording.id,
      data.recording.sha256,
      data.draftContrastId,
      data.contrastId,
      data.runId,
      data.invitationId,
      ...Object.values(members).map((member) => member.personId),
    ],
  };
}

// The fixture's people have no password that could be compared with one.
const passwordHash = await hashPassword(randomUUID());

async function actorOf(personId: string): Promise<Actor> {
  await db.updateTable('person').set({ passwordHash }).where('id', '=', personId).execute();
  const cookies = new CookieJar();
  await startSession(cookies, personId);
  return { personId, cookies };
}

async function makePerson(): Promise<string> {
  const { id } = await db
    .insertInto('person')
    .values({ email: `${randomUUID()}@example.org`, name: 'L. Oner', passwordHash: 'none' })
    .returning('id')
    .executeTakeFirstOrThrow();
  return id;
}

async function makeData(lead: Member) {
  const studyId = await makeStudy(db, lead);
  const recording = await ingest(lead, studyId);
  const { contrastId, hash } = await lockedContrast(db, lead, studyId, smallPlan(recording.sha256));
  const drafted = await makeRecording(db, lead, studyId, { events: tappingEvents });
  return {
    studyId,
    recording,
    participantId: recording.participantId,
    draftedSha256: drafted.sha256,
    draftContrastId: await makeDraft(lead, studyId, drafted.sha256),
    contrastId,
    planHash: hash,
    runId: await makeRun(lead, contrastId),
    invitationId: await makeInvitation(lead),
  };
}

/** A small recording as an upload would bring it in. */
async function ingest(lead: Member, studyId: string) {
  const folder = await mkdtemp(path.join(tmpdir(), 'nullwright-world-'));
  const file = path.join(folder, 'rest.edf');
  await writeFile(file, smallRecording());
  const ingested = await ingestRecording(db, storage, lead, {
    studyId,
    participantCode: 'P01',
    name: 'rest.edf',
    path: file,
    keepIdentification: false,
  });
  await rm(folder, { recursive: true });
  if (ingested.kind !== 'stored') throw new Error(`the recording was not stored: ${ingested.kind}`);
  return db
    .selectFrom('recording')
    .select(['id', 'sha256', 'participantId', 'storageKey'])
    .where('id', '=', ingested.id)
    .executeTakeFirstOrThrow();
}

async function makeDraft(lead: Member, studyId: string, sha256: string) {
  const made = await createContrast(db, lead, { studyId, name: randomUUID(), question: 'Beat?' });
  if (!made.ok) throw new Error(made.message);
  const now = await getPlanBody(db, lead, made.id, 1);
  if (now.state !== 'draft') throw new Error('a new contrast has no draft');
  const saved = await saveDraft(db, lead, made.id, {
    version: 1,
    basedOn: now.revision,
    draft: validDraft(sha256),
  });
  if (saved.state !== 'saved') throw new Error(`the draft was not saved: ${saved.state}`);
  return made.id;
}

/** A run under way; it is its starter's to report on. */
export async function makeRun(starter: Member, contrastId: string): Promise<string> {
  const { hash } = await db
    .selectFrom('plan')
    .select('hash')
    .where('contrastId', '=', contrastId)
    .executeTakeFirstOrThrow();
  const asked = { planHash: hash ?? '', engineVersion, workerCount: 1 };
  return (await createRun(db, starter, contrastId, asked)).id;
}

let computed: Promise<HeadlessResult> | null = null;

/** Every world holds the same recording and plan: what comes out is computed once. */
async function compute({ recording, teamId }: World): Promise<HeadlessResult> {
  const [facts] = await recordingFacts(db, teamId, { ids: [recording.id] });
  const bytes = new Uint8Array(await buffer(storage.stream(recording.storageKey)));
  return runHeadless(smallPlan(recording.sha256), [{ facts: facts!, source: bytesOf(bytes) }]);
}

/** A run whose result the server checked and stored. */
export async function makeFinishedRun(world: World): Promise<string> {
  computed ??= compute(world);
  const result = await computed;
  const { lead } = world.members;
  const id = await makeRun(lead, world.contrastId);
  await storeResult(db, storage, lead, id, result, result.summary);
  world.secrets.push(id);
  return id;
}

async function makeInvitation(lead: Member): Promise<string> {
  const { id } = await db
    .insertInto('invitation')
    .values({
      teamId: lead.teamId,
      email: `${randomUUID()}@example.org`,
      role: 'viewer',
      tokenHash: hashToken(newToken()),
      invitedBy: lead.personId,
      expiresAt: new Date(Date.now() + 3_600_000),
      acceptedAt: null,
      revokedAt: null,
    })
    .returning('id')
    .executeTakeFirstOrThrow();
  return id;
}
