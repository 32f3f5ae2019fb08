import { error } from '@sveltejs/kit';
import { parseNpy, type NpyArray } from '$workers/engine/npy';
import type { Member } from '../access';
import type { Db } from '../database';
import type { Storage } from '../storage';

/** Reads a whole map of a run. Throws a 404 where the run has no map of this name. */
export async function readMap(
  db: Db,
  storage: Storage,
  member: Member,
  runId: string,
  name: string,
): Promise<{ shape: number[]; data: NpyArray }> {
  const row = await db
    .selectFrom('storedMap')
    .select(['storageKey', 'sizeBytes'])
    .where('teamId', '=', member.teamId)
    .where('runId', '=', runId)
    .where('name', '=', name)
    .executeTakeFirst();
  if (!row) error(404, { code: 'not-found', message: `This run keeps no map called "${name}".` });
  const { shape, data } = parseNpy(await storage.read(row.storageKey, 0, row.sizeBytes));
  return { shape, data };
}
