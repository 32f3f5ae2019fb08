import { afterAll, describe, expect, it } from 'vitest';
import { planHash, planSchema } from '$engine';
import type { PlanDraft } from '$lib/model/plan-draft';
import {
  changesAfterFirstLook,
  createContrast,
  discardDraft,
  getContrast,
  getPlanBody,
  lockPlan,
  newVersion,
  saveDraft,
  stageFacts,
} from '$lib/server/contrasts';
import type { Member } from '$lib/server/access';
import {
  makeColleague,
  makeMember,
  makeRecording,
  makeStudy,
  openDatabase,
  waitsForRow,
} from './fixture';
import { tappingEvents, validDraft } from './valid-draft';

const db = openDatabase();
afterAll(() => db.destroy());

async function started() {
  const member = await makeMember(db);
  const studyId = await makeStudy(db, member);
  const made = await createContrast(db, member, { studyId, name: 'Cued', question: 'Beat?' });
  if (!made.ok) throw new Error(made.message);
  const recording = await makeRecording(db, member, studyId, { events: tappingEvents });
  return { member, studyId, contrastId: made.id, recording };
}

type Started = Awaited<ReturnType<typeof started>>;

async function save({ member, contrastId }: Started, draft: PlanDraft, version = 1) {
  const now = await getPlanBody(db, member, contrastId, version);
  if (now.state !== 'draft') throw new Error('the version is locked');
  const saved = await saveDraft(db, member, contrastId, { version, basedOn: now.revision, draft });
  if (saved.state !== 'saved') throw new Error(`the draft was not saved: ${saved.state}`);
  return saved.revision;
}

async function lock(at: Started, draft: PlanDraft, version = 1, reason = '') {
  const revision = await save(at, draft, version);
  return lockPlan(db, at.member, at.contrastId, { version, revision, reason });
}

async function lockedIssues(change: (draft: PlanDraft, at: Started) => void | Promise<void>) {
  const at = await started();
  const draft = validDraft(at.recording.sha256);
  await change(draft, at);
  const locked = await lock(at, draft);
  return locked.state === 'wrong' ? locked.issues : [];
}

async function finishRun(member: Member, contrastId: string, version: number) {
  const { plans } = await getContrast(db, member, contrastId);
  const planId = plans.find((plan) => plan.version === version)!.id;
  await db
    .insertInto('run')
    .values({
      teamId: member.teamId,
      planId,
      state: 'finished',
      seed: 'tide-2',
      engineVersion: '1',
      workerCount: 2,
      progress: 1,
      digest: 'd'.repeat(64),
      failure: null,
      startedBy: member.personId,
      finishedAt: new Date(),
    })
    .execute();
}

describe('saveDraft', () => {
  it('counts revisions and gives the draft back as it was typed', async () => {
    const at = await started();
    const draft = validDraft(at.recording.sha256);
    draft.test.alpha = 'five';
    expect(await save(at, draft)).toBe(1);
    const read = await getPlanBody(db, at.member, at.contrastId, 1);
    expect(read).toMatchObject({ state: 'draft', revision: 1, draft });
  });

  it('reports a newer draft of a colleague with its name and content, and keeps it', async () => {
    const at = await started();
    const colleague = await makeColleague(db, at.member.teamId, 'researcher');
    const theirs = { ...validDraft(at.recording.sha256), question: 'Theirs' };
    const mine = { ...validDraft(at.recording.sha256), question: 'Mine' };
    const first = { version: 1, basedOn: 0, draft: theirs };
    await saveDraft(db, colleague, at.contrastId, first);
    const late = await saveDraft(db, at.member, at.contrastId, { ...first, draft: mine });
    expect(late).toMatchObject({
      state: 'newer',
      revision: 1,
      savedByName: colleague.personName,
      draft: { question: 'Theirs' },
    });
    const read = await getPlanBody(db, at.member, at.contrastId, 1);
    expect(read).toMatchObject({ draft: { question: 'Theirs' } });
  });

  it('does not write to the draft of another team', async () => {
    const at = await started();
    const stranger = await makeMember(db);
    const draft = validDraft(at.recording.sha256);
    await expect(
      saveDraft(db, stranger, at.contrastId, { version: 1, basedOn: 0, draft }),
    ).rejects.toMatchObject({ status: 404 });
  });

  it('refuses a locked plan', async () => {
    const at = await started();
    const draft = validDraft(at.recording.sha256);
    await lock(at, draft);
    const late = await saveDraft(db, at.member, at.contrastId, { version: 1, basedOn: 1, draft });
    expect(late).toEqual({ state: 'locked' });
  });
});

describe('lockPlan', () => {
  it('does not lock a plan over a recording that is being deleted', async () => {
    const at = await started();
    const revision = await save(at, validDraft(at.recording.sha256));
    const deletion = await db.startTransaction().execute();
    await deletion.deleteFrom('recording').where('id', '=', at.recording.id).execute();
    const wanted = { version: 1, revision, reason: '' };
    const locking = lockPlan(db, at.member, at.contrastId, wanted);
    const waited = await waitsForRow(db, locking);
    await deletion.commit().execute();
    expect(await locking).toMatchObject({ state: 'wrong' });
    expect(waited).toBe(true);
  });

  it('lets no events be replaced while a plan that counts on them is locked', async () => {
    const at = await started();
    const revision = await save(at, validDraft(at.recording.sha256));
    const replacing = await db.startTransaction().execute();
    await replacing
      .selectFrom('recording')
      .select('id')
      .where('id', '=', at.recording.id)
      .forUpdate()
      .execute();
    await replacing.deleteFrom('event').where('recordingId', '=', at.recording.id).execute();
    const wanted = { version: 1, revision, reason: '' };
    const locking = lockPlan(db, at.member, at.contrastId, wanted);
    await waitsForRow(db, locking);
    await replacing.commit().execute();
    expect(await locking).toMatchObject({ state: 'wrong' });
  });

  it('stores the plan with its hash, time and person, and records it', async () => {
    const at = await started();
    const locked = await lock(at, validDraft(at.recording.sha256));
    if (locked.state !== 'locked') throw new Error(JSON.stringify(locked));
    const row = await db
      .selectFrom('plan')
      .select(['body', 'hash', 'lockedAt', 'lockedBy'])
      .where('contrastId', '=', at.contrastId)
      .executeTakeFirstOrThrow();
    const plan = planSchema.parse(row.body);
    expect(plan.recordings).toEqual([{ sha256: at.recording.sha256, name: at.recording.name }]);
    expect(row.hash).toBe(locked.hash);
    expect(await planHash(plan)).toBe(locked.hash);
    expect(row.lockedBy).toBe(at.member.personId);
    expect(row.lockedAt).toBeInstanceOf(Date);
    const audit = await db
      .selectFrom('auditEvent')
      .select('detail')
      .where('subjectId', '=', at.contrastId)
      .where('action', '=', 'plan.locked')
      .executeTakeFirstOrThrow();
    expect(audit.detail).toEqual({ version: 1, hash: locked.hash });
  });

  it('refuses a draft that was saved again after it was read', async () => {
    const at = await started();
    const revision = await save(at, validDraft(at.recording.sha256));
    await save(at, { ...validDraft(at.recording.sha256), question: 'Another?' });
    const late = await lockPlan(db, at.member, at.contrastId, { version: 1, revision, reason: '' });
    expect(late).toEqual({ state: 'newer' });
  });

  it('does not find the plan of another team', async () => {
    const at = await started();
    const revision = await save(at, validDraft(at.recording.sha256));
    const stranger = await makeMember(db);
    await expect(
      lockPlan(db, stranger, at.contrastId, { version: 1, revision, reason: '' }),
    ).rejects.toMatchObject({ status: 404 });
  });

  it('refuses a recording that is not in the study, also when another team has it', async () => {
    const stranger = await makeMember(db);
    const theirs = await makeRecording(db, stranger, await makeStudy(db, stranger), {
      events: tappingEvents,
    });
    const issues = await lockedIssues((draft) => {
      draft.b.rules[0].recording = theirs.sha256;
    });
    expect(issues).toMatchObject([{ field: 'b.rules.0.recording' }]);
  });

  it('refuses recordings of two participants', async () => {
    const issues = await lockedIssues(async (draft, { member, studyId }) => {
      const spec = { participant: 'P02', events: tappingEvents };
      const other = await makeRecording(db, member, studyId, spec);
      draft.b.rules[0].recording = other.sha256;
    });
    expect(issues).toMatchObject([{ field: 'b.rules.0.recording' }]);
  });

  it('refuses an event label the recording does not have, naming it', async () => {
    const issues = await lockedIssues((draft) => {
      draft.a.rules[0].labels = ['tone/cued', 'tone/lost'];
    });
    expect(issues).toMatchObject([
      { field: 'a.rules.0.labels', message: expect.stringContaining('"tone/lost"') },
    ]);
  });

  it('refuses a site the recording does not have, naming it', async () => {
    const issues = await lockedIssues((draft) => {
      draft.sites = ['C3', 'Oz'];
    });
    expect(issues).toMatchObject([{ field: 'sites', message: expect.stringContaining('Oz') }]);
  });

  it('refuses conditions of recordings with different sampling rates', async () => {
    const issues = await lockedIssues(async (draft, { member, studyId }) => {
      const spec = { events: tappingEvents, samplingRateHz: 250 };
      draft.b.rules[0].recording = (await makeRecording(db, member, studyId, spec)).sha256;
    });
    expect(issues).toMatchObject([{ field: 'sites', message: expect.stringContaining('250 Hz') }]);
  });

  it('refuses an event that is in A and in B', async () => {
    const issues = await lockedIssues((draft) => {
      draft.b.rules[0].labels = ['tap/free', 'tone/cued'];
    });
    expect(issues).toMatchObject([{ field: 'b.rules', message: expect.stringContaining('in A') }]);
  });

  it('refuses a condition with fewer than two epochs', async () => {
    const issues = await lockedIssues((draft) => {
      draft.epoch.fromS = '-58';
      draft.epoch.toS = '58';
    });
    expect(issues.map((issue) => issue.field)).toEqual(['a.rules', 'b.rules']);
  });

  it('refuses a draft that is no plan yet, field by field', async () => {
    const issues = await lockedIssues((draft) => {
      draft.test.alpha = 'five';
      draft.question = ' ';
    });
    expect(issues.map((issue) => issue.field).sort()).toEqual(['question', 'test.alpha']);
  });

  it('takes one of two people who lock at once', async () => {
    const at = await started();
    const revision = await save(at, validDraft(at.recording.sha256));
    const input = { version: 1, revision, reason: '' };
    const both = await Promise.all([
      lockPlan(db, at.member, at.contrastId, input),
      lockPlan(db, at.member, at.contrastId, input),
    ]);
    expect(both.map((each) => each.state).sort()).toEqual(['locked', 'newer']);
  });
});

describe('a locked plan in the database', () => {
  it.each([
    ['its body', { body: '{}' }],
    ['its hash', { hash: 'f'.repeat(64) }],
    ['its lock', { lockedAt: null, lockedBy: null, hash: null }],
    ['its reason', { reason: 'afterthought' }],
  ])('refuses a direct change of %s', async (_what, change) => {
    const at = await started();
    await lock(at, validDraft(at.recording.sha256));
    const update = db.updateTable('plan').set(change).where('contrastId', '=', at.contrastId);
    await expect(update.execute()).rejects.toThrow(/is locked and cannot change/);
  });

  it('refuses to be deleted', async () => {
    const at = await started();
    await lock(at, validDraft(at.recording.sha256));
    const removal = db.deleteFrom('plan').where('contrastId', '=', at.contrastId);
    await expect(removal.execute()).rejects.toThrow(/is locked and cannot change/);
  });
});

describe('newVersion', () => {
  it('begins from the locked plan, and a second call finds the same draft', async () => {
    const at = await started();
    await lock(at, validDraft(at.recording.sha256));
    const { member, contrastId } = at;
    const [first, second] = await Promise.all([
      newVersion(db, member, contrastId, 1),
      newVersion(db, member, contrastId, 1),
    ]);
    expect([first.version, second.version]).toEqual([2, 2]);
    const body = await getPlanBody(db, member, contrastId, 2);
    expect(body).toMatchObject({ state: 'draft', draft: { sites: ['C3', 'C4', 'P3', 'P4'] } });
  });

  it('is not locked without a reason', async () => {
    const at = await started();
    await lock(at, validDraft(at.recording.sha256));
    await newVersion(db, at.member, at.contrastId, 1);
    const locked = await lock(at, validDraft(at.recording.sha256), 2, '  ');
    expect(locked).toMatchObject({ state: 'wrong', issues: [{ field: 'reason' }] });
  });

  it('says which choices came after the first look', async () => {
    const at = await started();
    await lock(at, validDraft(at.recording.sha256));
    await finishRun(at.member, at.contrastId, 1);
    await newVersion(db, at.member, at.contrastId, 1);
    const changed = validDraft(at.recording.sha256);
    changed.epoch.toS = '0.9';
    changed.test.permutations = '5000';
    await lock(at, changed, 2, 'The effect seems to last longer.');
    const { plans } = await getContrast(db, at.member, at.contrastId);
    expect(await changesAfterFirstLook(db, at.member, plans[0].id)).toBeNull();
    expect(await changesAfterFirstLook(db, at.member, plans[1].id)).toMatchObject({
      seenVersion: 1,
      reason: 'The effect seems to last longer.',
      changes: [
        { field: 'epoch.toS', before: '0.8 s', after: '0.9 s' },
        { field: 'test.permutations', before: '1,000', after: '5,000' },
      ],
    });
  });

  it('holds no change against a version that was locked before anything was run', async () => {
    const at = await started();
    await lock(at, validDraft(at.recording.sha256));
    await newVersion(db, at.member, at.contrastId, 1);
    await lock(at, validDraft(at.recording.sha256), 2, 'A typing error.');
    await finishRun(at.member, at.contrastId, 1);
    const { plans } = await getContrast(db, at.member, at.contrastId);
    expect(await changesAfterFirstLook(db, at.member, plans[1].id)).toBeNull();
  });
});

describe('discardDraft', () => {
  it('removes a later draft and leaves the locked plan', async () => {
    const at = await started();
    await lock(at, validDraft(at.recording.sha256));
    await newVersion(db, at.member, at.contrastId, 1);
    expect(await discardDraft(db, at.member, at.contrastId)).toEqual({ contrastRemoved: false });
    const { plans } = await getContrast(db, at.member, at.contrastId);
    expect(plans.map((plan) => plan.version)).toEqual([1]);
  });

  it('removes the contrast with its first draft', async () => {
    const at = await started();
    expect(await discardDraft(db, at.member, at.contrastId)).toEqual({ contrastRemoved: true });
    await expect(getContrast(db, at.member, at.contrastId)).rejects.toMatchObject({ status: 404 });
  });

  it('finds no draft where the plan is locked, and none of another team', async () => {
    const at = await started();
    const stranger = await makeMember(db);
    await expect(discardDraft(db, stranger, at.contrastId)).rejects.toMatchObject({ status: 404 });
    await lock(at, validDraft(at.recording.sha256));
    await expect(discardDraft(db, at.member, at.contrastId)).rejects.toMatchObject({ status: 404 });
  });
});

describe('stageFacts', () => {
  it('gives the run of a locked version, and nothing for a draft', async () => {
    const at = await started();
    expect(await stageFacts(db, at.member, at.contrastId)).toEqual([]);
    await lock(at, validDraft(at.recording.sha256));
    await finishRun(at.member, at.contrastId, 1);
    expect(await stageFacts(db, at.member, at.contrastId)).toMatchObject([
      { version: 1, permutations: 1000, run: { state: 'finished', edgeCount: 0 } },
    ]);
  });
});
