import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Member } from '../access';
import type { Db } from '../database';
import type { Storage } from '../storage';

export type SavedStudy = { ok: true; id: string } | { ok: false; field: 'name'; message: string };

interface StudyInput {
  name: string;
  description: string;
}

/** Makes an empty study. Its name is unique within the team. */
export async function createStudy(
  db: Db,
  member: Member,
  input: StudyInput & { simulated?: boolean },
): Promise<SavedStudy> {
  return orNameTaken(input.name, () =>
    db.transaction().execute(async (trx) => {
      const { id } = await trx
        .insertInto('study')
        .values({
          teamId: member.teamId,
          name: input.name,
          description: input.description,
          simulated: input.simulated ?? false,
          createdBy: member.personId,
        })
        .returning('id')
        .executeTakeFirstOrThrow();
      await record(trx, member, 'study.created', { type: 'study', id }, { name: input.name });
      return id;
    }),
  );
}

export async function updateStudy(
  db: Db,
  member: Member,
  studyId: string,
  input: StudyInput,
): Promise<SavedStudy> {
  return orNameTaken(input.name, () =>
    db.transaction().execute(async (trx) => {
      const updated = await trx
        .updateTable('study')
        .set({ name: input.name, description: input.description })
        .where('teamId', '=', member.teamId)
        .where('id', '=', studyId)
        .returning('id')
        .executeTakeFirst();
      if (!updated) notFound('study');
      const subject = { type: 'study', id: studyId };
      await record(trx, member, 'study.changed', subject, { name: input.name });
      return studyId;
    }),
  );
}

async function orNameTaken(name: string, save: () => Promise<string>): Promise<SavedStudy> {
  try {
    return { ok: true, id: await save() };
  } catch (reason) {
    const violated = reason instanceof Error && 'constraint' in reason ? reason.constraint : null;
    if (violated !== 'study_team_name_key') throw reason;
    const message = `Your team already has a study called "${name}". Choose another name.`;
    return { ok: false, field: 'name', message };
  }
}

export interface Study {
  id: string;
  name: string;
  description: string;
  simulated: boolean;
  createdAt: Date;
}

export async function getStudy(db: Db, teamId: string, studyId: string): Promise<Study> {
  const study = await db
    .selectFrom('study')
    .select(['id', 'name', 'description', 'simulated', 'createdAt'])
    .where('teamId', '=', teamId)
    .where('id', '=', studyId)
    .executeTakeFirst();
  return study ?? notFound('study');
}

/** Names of the contrasts whose locked plans keep the study from being deleted. */
export async function lockedContrasts(db: Db, teamId: string, studyId: string): Promise<string[]> {
  const rows = await db
    .selectFrom('contrast')
    .innerJoin('plan', 'plan.contrastId', 'contrast.id')
    .select('contrast.name')
    .distinct()
    .where('contrast.teamId', '=', teamId)
    .where('contrast.studyId', '=', studyId)
    .where('plan.lockedAt', 'is not', null)
    .orderBy('contrast.name')
    .execute();
  return rows.map((row) => row.name);
}

export type RemovedStudy = { ok: true } | { ok: false; lockedContrasts: string[] };

/** Deletes a study with its recordings and drafts, unless a locked plan stands in it. */
export async function removeStudy(
  db: Db,
  storage: Storage,
  member: Member,
  studyId: string,
): Promise<RemovedStudy> {
  const study = await getStudy(db, member.teamId, studyId);
  const outcome = await db.transaction().execute(async (trx) => {
    const contrasts = trx
      .selectFrom('contrast')
      .select('id')
      .where('teamId', '=', member.teamId)
      .where('studyId', '=', studyId);
    // Held until the end, so that nobody locks one of the plans in between.
    await trx
      .selectFrom('plan')
      .select('id')
      .where('contrastId', 'in', contrasts)
      .forUpdate()
      .execute();
    const locked = await lockedContrasts(trx, member.teamId, studyId);
    if (locked.length > 0) return { ok: false as const, lockedContrasts: locked };
    await trx.deleteFrom('plan').where('contrastId', 'in', contrasts).execute();
    await trx
      .deleteFrom('contrast')
      .where('teamId', '=', member.teamId)
      .where('studyId', '=', studyId)
      .execute();
    const recordings = await trx
      .deleteFrom('recording')
      .where('teamId', '=', member.teamId)
      .where('studyId', '=', studyId)
      .returning('storageKey')
      .execute();
    await trx
      .deleteFrom('study')
      .where('teamId', '=', member.teamId)
      .where('id', '=', studyId)
      .execute();
    const subject = { type: 'study', id: studyId };
    await record(trx, member, 'study.deleted', subject, {
      name: study.name,
      recordings: recordings.length,
    });
    return { ok: true as const, keys: recordings.map((row) => row.storageKey) };
  });
  if (!outcome.ok) return outcome;
  await Promise.all(outcome.keys.map((key) => storage.remove(key)));
  return { ok: true };
}
