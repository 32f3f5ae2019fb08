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

const pageSize = 25;

/**
 * A page of the team's record, newest first, starting below event `before`. `next` is what to
 * pass for the following page, null on the last one.
 */
export async function listRecord(db: Kysely<Database>, teamId: string, before?: number) {
  let query = db
    .selectFrom('auditEvent')
    .leftJoin('person', 'person.id', 'auditEvent.personId')
    .select([
      'auditEvent.id',
      'auditEvent.action',
      'auditEvent.detail',
      'auditEvent.createdAt',
      'person.name as personName',
    ])
    .where('auditEvent.teamId', '=', teamId)
    .orderBy('auditEvent.id', 'desc')
    // One more than shown tells whether there is a next page.
    .limit(pageSize + 1);
  if (before !== undefined) query = query.where('auditEvent.id', '<', before);
  const rows = await query.execute();
  const events = rows.slice(0, pageSize);
  return { events, next: rows.length > pageSize ? (events.at(-1)?.id ?? null) : null };
}
