import type { MaximumNull } from '$lib/model/result';
import type { Member } from '../access';
import type { Db } from '../database';

/** The distributions of the maximum that the run kept, one a kind. */
export async function runNulls(db: Db, member: Member, runId: string): Promise<MaximumNull[]> {
  const rows = await db
    .selectFrom('nullSummary')
    .select(['kind', 'surrogates', 'mean', 'sd', 'criticalValue'])
    .where('teamId', '=', member.teamId)
    .where('runId', '=', runId)
    .orderBy('kind')
    .execute();
  return rows.map((row) => ({ ...row, surrogates: Float32Array.from(row.surrogates) }));
}
