import { afterAll, describe, expect, it } from 'vitest';
import { planDraftSchema } from '$lib/model/plan-draft';
import { createContrast, renameContrast } from '$lib/server/contrasts';
import { makeMember, makeStudy, openDatabase } from './fixture';

const db = openDatabase();
afterAll(() => db.destroy());

async function started() {
  const member = await makeMember(db);
  const studyId = await makeStudy(db, member);
  const made = await createContrast(db, member, {
    studyId,
    name: ' Cued against free ',
    question: 'Does the beat matter?',
  });
  if (!made.ok) throw new Error(made.message);
  return { member, studyId, contrastId: made.id };
}

describe('createContrast', () => {
  it('makes the contrast with draft plan 1 that holds the question, and records it', async () => {
    const { member, contrastId } = await started();
    const plan = await db
      .selectFrom('plan')
      .select(['version', 'body', 'lockedAt'])
      .where('contrastId', '=', contrastId)
      .executeTakeFirstOrThrow();
    expect(plan.version).toBe(1);
    expect(plan.lockedAt).toBeNull();
    expect(planDraftSchema.parse(plan.body).question).toBe('Does the beat matter?');
    const audit = await db
      .selectFrom('auditEvent')
      .select(['action', 'detail'])
      .where('teamId', '=', member.teamId)
      .where('subjectId', '=', contrastId)
      .execute();
    expect(audit).toEqual([{ action: 'contrast.created', detail: { name: 'Cued against free' } }]);
  });

  it('refuses a name the study already has, and leaves nothing behind', async () => {
    const { member, studyId } = await started();
    const again = await createContrast(db, member, {
      studyId,
      name: 'Cued against free',
      question: '',
    });
    expect(again).toMatchObject({ ok: false, field: 'name' });
    const count = await db
      .selectFrom('contrast')
      .select((eb) => eb.fn.countAll<number>().as('n'))
      .where('studyId', '=', studyId)
      .executeTakeFirstOrThrow();
    expect(count.n).toBe(1);
  });

  it('does not find the study of another team', async () => {
    const { studyId } = await started();
    const stranger = await makeMember(db);
    await expect(
      createContrast(db, stranger, { studyId, name: 'Theirs', question: '' }),
    ).rejects.toMatchObject({ status: 404 });
  });
});

describe('renameContrast', () => {
  it('renames, and the record keeps both names', async () => {
    const { member, contrastId } = await started();
    expect(await renameContrast(db, member, contrastId, 'Paced')).toEqual({
      ok: true,
      id: contrastId,
    });
    const audit = await db
      .selectFrom('auditEvent')
      .select('detail')
      .where('subjectId', '=', contrastId)
      .where('action', '=', 'contrast.renamed')
      .executeTakeFirstOrThrow();
    expect(audit.detail).toEqual({ from: 'Cued against free', to: 'Paced' });
  });

  it('does not find the contrast of another team', async () => {
    const { contrastId } = await started();
    const stranger = await makeMember(db);
    await expect(renameContrast(db, stranger, contrastId, 'Taken over')).rejects.toMatchObject({
      status: 404,
    });
  });
});
