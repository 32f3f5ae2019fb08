import { randomUUID } from 'node:crypto';
import { roles, type Role } from '$lib/model/role';
import { hashToken, newToken, startSession } from '$lib/server/accounts';
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

async function actorOf(personId: string): Promise<Actor> {
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
  return {
    studyId,
    participantId,
    recording,
    draftContrastId: draft.contrastId,
    draftRevision: draft.revision,
    contrastId: locked.contrastId,
    planHash: plan.hash,
    runId: await makeRun(lead, locked.contrastId, 'running'),
    finishedRunId: await makeRun(lead, locked.contrastId, 'finished'),
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

async function makeRun(lead: Member, contrastId: string, state: 'running' | 'finished') {
  const finished = state === 'finished';
  const plan = await db
    .selectFrom('plan')
    .select('id')
    .where('contrastId', '=', contrastId)
    .executeTakeFirstOrThrow();
  const { id } = await db
    .insertInto('run')
    .values({
      teamId: lead.teamId,
      planId: plan.id,
      state,
      seed: 'tide-2',
      engineVersion,
      workerCount: 2,
      progress: finished ? 1 : 0.5,
      digest: finished ? 'd'.repeat(64) : null,
      failure: null,
      startedBy: lead.personId,
      finishedAt: finished ? new Date() : null,
    })
    .returning('id')
    .executeTakeFirstOrThrow();
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
