import { sql } from 'kysely';
import { engineVersion } from '$engine';
import type { Db } from '../database';
import { log } from '../log';

export interface Health {
  status: 'ok' | 'failing';
  database: 'ok' | 'unreachable';
  engine: string;
}

/** Whether the server can do its work. The cause of a failure goes to the log, not to the asker. */
export async function checkHealth(db: Db): Promise<Health> {
  try {
    await sql`select 1`.execute(db);
    return { status: 'ok', database: 'ok', engine: engineVersion };
  } catch (err) {
    log.error({ err }, 'health check: database does not answer');
    return { status: 'failing', database: 'unreachable', engine: engineVersion };
  }
}
