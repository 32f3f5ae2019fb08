import { afterAll, afterEach, beforeEach, describe, expect, it } from 'vitest';
import { createContrast } from '$lib/server/contrasts';
import {
  createStudy,
  getStudy,
  listStudies,
  removeStudy,
  studyContrasts,
  updateStudy,
} from '$lib/server/studies';
import { smallBytes } from '../../engine/read/samples';
import { openDatabase } from '../contrasts/fixture';
import { openLab, type Lab } from '../recordings/lab';

const db = openDatabase();
afterAll(() => db.destroy());

let lab: Lab;
beforeEach(async () => {
  lab = await openLab(db);
});
afterEach(() => lab.close());

const list = (search: string, sort: 'newest' | 'name' = 'name') =>
  listStudies(db, lab.member.teamId, { search, sort });

async function contrast(name: string) {
  const input = { studyId: lab.studyId, name, question: `Is it ${name}?` };
  const made = await createContrast(db, lab.member, input);
  if (!made.ok) throw new Error(made.message);
  return made.id;
}

async function lock(contrastId: string) {
  const { id } = await db
    .updateTable('plan')
    .set({
      body: JSON.stringify({ test: { corrections: ['max-statistic'] }, recordings: [] }),
      hash: '0'.repeat(64),
      lockedAt: new Date(),
      lockedBy: lab.member.personId,
    })
    .where('contrastId', '=', contrastId)
    .returning('id')
    .executeTakeFirstOrThrow();
  return id;
}

describe('studies', () => {
  it('are found by words of their name or description, taken as they stand', async () => {
    await createStudy(db, lab.member, { name: 'Paced tapping', description: '100% cued' });
    await createStudy(db, lab.member, { name: 'Rest', description: 'eyes open and closed' });
    expect((await list('TAPPING')).map((study) => study.name)).toEqual(['Paced tapping']);
    expect((await list('eyes')).map((study) => study.name)).toEqual(['Rest']);
    expect((await list('100%')).map((study) => study.name)).toEqual(['Paced tapping']);
    expect(await list('%_%')).toEqual([]);
  });

  it('count what they hold', async () => {
    await lab.ingest(smallBytes());
    await contrast('one');
    const study = (await list('')).find((one) => one.id === lab.studyId);
    expect(study).toMatchObject({ participantCount: 1, recordingCount: 1, contrastCount: 1 });
  });

  it('have a name once in a team, when made and when renamed', async () => {
    const input = { name: 'Rest', description: '' };
    const first = await createStudy(db, lab.member, input);
    expect(first.ok).toBe(true);
    const refused = { ok: false, field: 'name', message: expect.stringContaining('"Rest"') };
    expect(await createStudy(db, lab.member, input)).toMatchObject(refused);
    expect(await updateStudy(db, lab.member, lab.studyId, input)).toMatchObject(refused);
  });

  it('belong to their team alone', async () => {
    const other = await openLab(db);
    await expect(getStudy(db, other.member.teamId, lab.studyId)).rejects.toMatchObject({
      status: 404,
    });
    const change = { name: 'mine', description: '' };
    await expect(updateStudy(db, other.member, lab.studyId, change)).rejects.toMatchObject({
      status: 404,
    });
    await expect(removeStudy(db, other.storage, other.member, lab.studyId)).rejects.toMatchObject({
      status: 404,
    });
    await other.close();
  });

  it('are deleted with drafts, recordings and files', async () => {
    const ingested = await lab.ingest(smallBytes());
    await contrast('draft');
    expect(await removeStudy(db, lab.storage, lab.member, lab.studyId)).toEqual({ ok: true });
    const key = `recordings/${ingested.id.slice(0, 2)}/${ingested.id}`;
    expect(await lab.storage.exists(key)).toBe(false);
  });

  it('stay once a plan is locked in them', async () => {
    await lock(await contrast('locked'));
    await contrast('draft');
    expect(await removeStudy(db, lab.storage, lab.member, lab.studyId)).toEqual({
      ok: false,
      lockedContrasts: ['locked'],
    });
    expect(await studyContrasts(db, lab.member.teamId, lab.studyId)).toHaveLength(2);
  });
});

describe('a study’s contrasts', () => {
  it('say their stage, their state and who acted last', async () => {
    await contrast('draft');
    const planId = await lock(await contrast('locked'));
    const values = {
      teamId: lab.member.teamId,
      planId,
      seed: 's',
      engineVersion: '1',
      workerCount: 2,
      startedBy: lab.member.personId,
      progress: 0.456,
    };
    const before = await studyContrasts(db, lab.member.teamId, lab.studyId);
    expect(before.map(({ stage, state }) => [stage, state])).toEqual([
      ['define', 'plan 1, draft'],
      ['run', 'plan 1, locked'],
    ]);
    expect(before[0]).toMatchObject({
      question: 'Is it draft?',
      lastAct: { personName: lab.member.personName, action: 'contrast.created' },
      headline: null,
    });
    await db
      .insertInto('run')
      .values({ ...values, state: 'paused' })
      .execute();
    const paused = await studyContrasts(db, lab.member.teamId, lab.studyId);
    expect(paused[1]!.state).toBe('plan 1, paused at 45 %');
  });

  it('carry the headline of the newest finished run under the claiming correction', async () => {
    const planId = await lock(await contrast('done'));
    const { id: runId } = await db
      .insertInto('run')
      .values({
        teamId: lab.member.teamId,
        planId,
        state: 'running',
        seed: 's',
        engineVersion: '1',
        workerCount: 1,
        startedBy: lab.member.personId,
      })
      .returning('id')
      .executeTakeFirstOrThrow();
    const numbers = { fromHz: 8, toHz: 12, fromS: 0, toS: 0.5, peakHz: 10, peakS: 0.2 };
    const measured = {
      observedA: 0.6,
      observedB: 0.3,
      difference: 0.3,
      z: 5,
      lagARad: 1,
      lagBRad: 1,
    };
    const edge = (pairIndex: number, correction: string, adjustedP: number) => ({
      ...numbers,
      ...measured,
      teamId: lab.member.teamId,
      runId,
      correction,
      pairIndex,
      siteJ: 'C3',
      siteK: `P${pairIndex}`,
      peakPoint: 0,
      points: 4,
      p: 0.001,
      pLow: 0.0001,
      pHigh: 0.002,
      adjustedP,
      adjustedPLow: null,
      adjustedPHigh: null,
      clusterId: null,
    });
    await db
      .insertInto('edge')
      .values([
        edge(0, 'max-statistic', 0.02),
        edge(0, 'max-statistic', 0.03),
        edge(1, 'max-statistic', 0.004),
        edge(2, 'benjamini-hochberg', 0.0005),
      ])
      .execute();
    // A finished run takes no further edges, so it is finished last.
    await db
      .updateTable('run')
      .set({ state: 'finished', progress: 1, digest: '1'.repeat(64), finishedAt: new Date() })
      .where('id', '=', runId)
      .execute();
    const [done] = await studyContrasts(db, lab.member.teamId, lab.studyId);
    expect(done).toMatchObject({
      stage: 'result',
      headline: { planVersion: 1, edgeCount: 3, smallestAdjustedP: 0.004 },
    });
  });
});
