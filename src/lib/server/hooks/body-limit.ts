import { json, type Handle } from '@sveltejs/kit';
import { formatBytes } from '$lib/model/format';

const megabyte = 1_000_000;

/** What forms and small JSON need. */
const usualBytes = 2 * megabyte;

/** Bodies that are read whole and may be larger: sidecars, drafts and results. */
const largerBytes: Record<string, number> = {
  'POST /(app)/studies/[studyId=uuid]/recordings': 32 * megabyte,
  'POST /(app)/studies/[studyId=uuid]/recordings/[recordingId=uuid]': 32 * megabyte,
  'PUT /api/contrasts/[contrastId=uuid]/draft': 32 * megabyte,
  'POST /api/uploads/[...path]': 32 * megabyte,
  'PUT /api/runs/[runId=uuid]/result': 64 * megabyte,
};

/** Streamed to the disk, and bounded by what is due there. */
const streamed = new Set([
  'PATCH /api/uploads/[...path]',
  'PUT /api/runs/[runId=uuid]/maps/[name]',
]);

/**
 * The server's own limit (BODY_SIZE_LIMIT) must let whole maps pass. Every other body is held in
 * memory and parsed there, so each has a limit of its own and must state its length; Node reads no
 * more than is stated.
 */
export const bodyLimit: Handle = async ({ event, resolve }) => {
  const { request, route } = event;
  const target = `${request.method} ${route.id ?? ''}`;
  if (!request.body || streamed.has(target)) return resolve(event);
  const limit = largerBytes[target] ?? usualBytes;
  const stated = request.headers.get('content-length');
  if (stated === null) {
    const message = 'The request must state its Content-Length.';
    return json({ code: 'length-required', message }, { status: 411 });
  }
  if (!(Number(stated) <= limit)) {
    const message = `The request holds ${formatBytes(Number(stated))}; ${formatBytes(limit)} are the most here.`;
    return json({ code: 'too-large', message }, { status: 413 });
  }
  return resolve(event);
};
