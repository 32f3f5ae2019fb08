import { sql } from 'kysely';
import type { Db } from '../database';

export const studySorts = ['newest', 'name'] as const;
export type StudySort = (typeof studySorts)[number];

export interface ListedStudy {
  id: string;
  name: string;
  description: string;
  simulated: boolean;
  createdAt: Date;
  participantCount: number;
  recordingCount: number;
  contrastCount: number;
}

/** The team's studies whose name or description holds `search`, with what they contain. */
export async function listStudies(
  db: Db,
  teamId: string,
  { search, sort }: { search: string; sort: StudySort },
): Promise<ListedStudy[]> {
  const count = (table: 'participant' | 'recording' | 'contrast') =>
    sql<number>`(select count(*) from ${sql.table(table)} x where x.study_id = study.id)`;
  let query = db
    .selectFrom('study')
    .select(['id', 'name', 'description', 'simulated', 'createdAt'])
    .select([
      count('participant').as('participantCount'),
      count('recording').as('recordingCount'),
      count('contrast').as('contrastCount'),
    ])
    .where('teamId', '=', teamId);
  if (search !== '') {
    // Characters that LIKE gives a meaning are searched as they stand.
    const pattern = `%${search.replace(/[\\%_]/g, '\\$&')}%`;
    query = query.where((where) =>
      where.or([where('name', 'ilike', pattern), where('description', 'ilike', pattern)]),
    );
  }
  return sort === 'name'
    ? query.orderBy(sql`lower(name)`).execute()
    : query.orderBy('createdAt', 'desc').orderBy('name').execute();
}
