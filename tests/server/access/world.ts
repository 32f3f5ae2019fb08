import { randomUUID } from 'node:crypto';
import { roles, type Role } from '$lib/model/role';
import { hashPassword, hashToken, newToken, startSession } from '$lib/server/accounts';
import type { Member } from '$lib/server/access';
import { createContrast, getPlanBody, lockPlan, saveDraft } from '$lib/server/contrasts';
import { db } from '$lib/server/database';
import { storage } from '$lib/server/storage';
import { engineVersion } from '$engine';
import { makeColleague, makeMember, makeRecording, makeStudy } from '../contrasts/fixture';
import { tappingEvents, validDraft } from '../contrasts/valid-draft';
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
  recording: { id: string; sha256: string; name: string };
  /** A contrast with an unlocked, valid plan. */
  draftContrastId: string;
  draftRevision: number;
  /** A contrast with a locked plan, a run under way and a finished one. */
  contrastId: string;
  planHash: string;
  runId: string;
  finishedRunId: string;
  /** A map of the finished run. */
  mapName: string;
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
      data.planHash,
      data.runId,
      data.finishedRunId,
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
  const recording = await makeRecording(db, lead, studyId, { events: tappingEvents });
  await storage.put(`recordings/${recording.sha256}`, new Uint8Array(1000));
  const { participantId } = await db
    .selectFrom('recording')
    .select('participantId')
    .where('id', '=', recording.id)
    .executeTakeFirstOrThrow();
  const draft = await makeDraft(lead, studyId, recording.sha256);
  const locked = await makeDraft(lead, studyId, recording.sha256);
  const plan = await lockPlan(db, lead, locked.contrastId, {
    version: 1,
    revision: locked.revision,
    reason: '',
  });
  if (plan.state !== 'locked') throw new Error(`the plan was not locked: ${JSON.stringify(plan)}`);
  const finishedRunId = await makeRun(lead, locked.contrastId);
  const mapName = await makeMap(lead, finishedRunId);
  await finish(finishedRunId);
  return {
    studyId,
    participantId,
    recording,
    draftContrastId: draft.contrastId,
    draftRevision: draft.revision,
    contrastId: locked.contrastId,
    planHash: plan.hash,
    runId: await makeRun(lead, locked.contrastId),
    finishedRunId,
    mapName,
    invitationId: await makeInvitation(lead),
  };
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
  return { contrastId: made.id, revision: saved.revision };
}

export async function makeRun(starter: Member, contrastId: string): Promise<string> {
  const plan = await db
    .selectFrom('plan')
    .select('id')
    .where('contrastId', '=', contrastId)
    .executeTakeFirstOrThrow();
  const { id } = await db
    .insertInto('run')
    .values({
      teamId: starter.teamId,
      planId: plan.id,
      state: 'running',
      seed: 'tide-2',
      engineVersion,
      workerCount: 2,
      digest: null,
      failure: null,
      startedBy: starter.personId,
      finishedAt: null,
    })
    .returning('id')
    .executeTakeFirstOrThrow();
  return id;
}

/** Finished as far as rows go: after this nothing of the run can change. */
async function finish(runId: string): Promise<void> {
  await db
    .updateTable('run')
    .set({ state: 'finished', progress: 1, digest: 'd'.repeat(64), finishedAt: new Date() })
    .where('id', '=', runId)
    .execute();
}

async function makeMap(lead: Member, runId: string): Promise<string> {
  const name = 'z';
  const storageKey = `maps/${runId}.npy`;
  const { sizeBytes, sha256 } = await storage.put(storageKey, new Uint8Array(256));
  await db
    .insertInto('storedMap')
    .values({
      teamId: lead.teamId,
      runId,
      name,
      storageKey,
      sha256,
      sizeBytes,
      dtype: '<f4',
      shape: [1],
    })
    .execute();
  return name;
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
