import { Readable } from 'node:stream';
import type { ReadableStream } from 'node:stream/web';
import { error } from '@sveltejs/kit';
import { allow } from '$lib/server/access';
import { db } from '$lib/server/database';
import { answerRefusal, openMap, openSlices, readIndices, receiveMap } from '$lib/server/runs';
import { storage } from '$lib/server/storage';
import type { RequestHandler } from './$types';

export const PUT: RequestHandler = async (event) => {
  const member = allow(event, 'run.write');
  const { runId, name } = event.params;
  if (!event.request.body) error(400, { code: 'empty', message: 'The request has no body.' });
  const bytes = Readable.fromWeb(event.request.body as ReadableStream<Uint8Array>);
  await receiveMap(db, storage, member, runId, name, bytes).catch(answerRefusal);
  return new Response(null, { status: 204 });
};

/** The whole map, or with `?pair=3` or `?site=0,4` those entries of its first axis. */
export const GET: RequestHandler = async (event) => {
  const { teamId } = allow(event, 'result.read');
  const { runId, name } = event.params;
  const indices = readIndices(event.url);
  const { sizeBytes, bytes } = indices
    ? await openSlices(db, storage, teamId, runId, name, indices)
    : await openMap(db, storage, teamId, runId, name);
  return new Response(Readable.toWeb(bytes) as globalThis.ReadableStream<Uint8Array>, {
    headers: {
      'Content-Type': 'application/octet-stream',
      'Content-Length': String(sizeBytes),
      'Content-Disposition': `attachment; filename="${name}.npy"`,
      // A finished run never changes; still, another person at this machine must not find it.
      'Cache-Control': 'private, no-store',
    },
  });
};
