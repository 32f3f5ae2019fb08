import { sql } from 'kysely';
import type { Db } from '../database';

/** Names of the study's contrasts with a locked plan that uses this recording. */
export async function lockedUse(
  db: Db,
  teamId: string,
  recording: { studyId: string; sha256: string },
): Promise<string[]> {
  const named = JSON.stringify([{ sha256: recording.sha256 }]);
  const rows = await db
    .selectFrom('plan')
    .innerJoin('contrast', 'contrast.id', 'plan.contrastId')
    .select('contrast.name')
    .distinct()
    .where('plan.teamId', '=', teamId)
    .where('contrast.studyId', '=', recording.studyId)
    .where('plan.lockedAt', 'is not', null)
    .where(sql<boolean>`plan.body -> 'recordings' @> ${named}::jsonb`)
    .orderBy('contrast.name')
    .execute();
  return rows.map((row) => row.name);
}
