import type { Readable } from 'node:stream';
import { error } from '@sveltejs/kit';
import { isSentMapName } from '$lib/model/run-maps';
import type { Member } from '../access';
import type { Db } from '../database';
import type { Storage } from '../storage';
import { expectationOf, planById } from './context';
import { getRun, refuseOver, requireStarter } from './runs';
import { checkHeader, stageMap } from './staging';

/** Takes one map of a run under way into its waiting place. */
export async function receiveMap(
  db: Db,
  storage: Storage,
  member: Member,
  runId: string,
  name: string,
  bytes: Readable,
): Promise<void> {
  if (!isSentMapName(name)) {
    error(404, { code: 'not-found', message: `A run has no map called ${name.slice(0, 40)}.` });
  }
  const run = await getRun(db, member.teamId, runId);
  requireStarter(member, run.startedBy);
  if (run.state === 'finished' || run.state === 'stopped') refuseOver(run.state);
  const locked = await planById(db, member.teamId, run.planId);
  const { axes, planned } = await expectationOf(db, member.teamId, locked);
  await stageMap(storage, runId, name, bytes, (header) =>
    checkHeader(name, header, axes, { atMost: planned.length }),
  );
}

const mostSlices = 64;

/** `?pair=3` or `?site=0,4`: entries along a map's first axis; null asks for the whole map. */
export function readIndices(url: URL): number[] | null {
  const text = url.searchParams.get('pair') ?? url.searchParams.get('site');
  if (text === null) return null;
  const indices = text.split(',').map((part) => (/^\d{1,7}$/.test(part) ? Number(part) : NaN));
  if (indices.some(Number.isNaN) || indices.length > mostSlices) {
    error(400, {
      code: 'invalid',
      message: `Give up to ${mostSlices} numbers from 0, with commas between them.`,
    });
  }
  return indices;
}
