import type { Kysely } from 'kysely';
import type { Member } from './access';
import type { Database } from './database/tables';

interface Subject {
  type: string;
  id: string;
}

/** Appends to the team's record of actions; a transaction may be passed in place of the database. */
export async function record(
  db: Kysely<Database>,
  member: Pick<Member, 'teamId' | 'personId'>,
  action: string,
  subject: Subject,
  detail: Record<string, unknown> = {},
): Promise<void> {
  await db
    .insertInto('auditEvent')
    .values({
      teamId: member.teamId,
      personId: member.personId,
      action,
      subjectType: subject.type,
      subjectId: subject.id,
      detail: JSON.stringify(detail),
    })
    .execute();
}
