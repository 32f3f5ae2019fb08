import { newDraft } from '$lib/model/plan-draft';
import { suggestSeed } from '$lib/model/seed';
import type { Member } from '../access';
import { record } from '../audit';
import type { Db } from '../database';
import { notFound } from '../access/not-found';

export type Named = { ok: true; id: string } | { ok: false; field: 'name'; message: string };

function nameTaken(error: unknown, name: string): Named {
  const violated = error instanceof Error && 'constraint' in error ? error.constraint : null;
  if (violated !== 'contrast_study_name_key') throw error;
  return {
    ok: false,
    field: 'name',
    message: `This study already has a contrast called "${name}". Choose another name.`,
  };
}

/** Makes a contrast with draft plan 1. The name is unique within its study. */
export async function createContrast(
  db: Db,
  member: Member,
  input: { studyId: string; name: string; question: string },
): Promise<Named> {
  const study = await db
    .selectFrom('study')
    .select('id')
    .where('teamId', '=', member.teamId)
    .where('id', '=', input.studyId)
    .executeTakeFirst();
  if (!study) notFound('study');
  const name = input.name.trim();
  try {
    const id = await db.transaction().execute(async (trx) => {
      const owner = { teamId: member.teamId, createdBy: member.personId };
      const contrast = await trx
        .insertInto('contrast')
        .values({ ...owner, studyId: study.id, name })
        .returning('id')
        .executeTakeFirstOrThrow();
      const body = JSON.stringify(newDraft(input.question.trim(), suggestSeed()));
      await trx
        .insertInto('plan')
        .values({ ...owner, contrastId: contrast.id, version: 1, body })
        .execute();
      await record(
        trx,
        member,
        'contrast.created',
        { type: 'contrast', id: contrast.id },
        { name },
      );
      return contrast.id;
    });
    return { ok: true, id };
  } catch (error) {
    return nameTaken(error, name);
  }
}

export async function renameContrast(
  db: Db,
  member: Member,
  contrastId: string,
  newName: string,
): Promise<Named> {
  const name = newName.trim();
  try {
    await db.transaction().execute(async (trx) => {
      const before = await trx
        .selectFrom('contrast')
        .select('name')
        .where('teamId', '=', member.teamId)
        .where('id', '=', contrastId)
        .forUpdate()
        .executeTakeFirst();
      if (!before) notFound('contrast');
      if (before.name === name) return;
      await trx
        .updateTable('contrast')
        .set({ name })
        .where('teamId', '=', member.teamId)
        .where('id', '=', contrastId)
        .execute();
      const detail = { from: before.name, to: name };
      await record(trx, member, 'contrast.renamed', { type: 'contrast', id: contrastId }, detail);
    });
    return { ok: true, id: contrastId };
  } catch (error) {
    return nameTaken(error, name);
  }
}
