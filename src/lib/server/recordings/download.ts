import { Readable } from 'node:stream';
import { error } from '@sveltejs/kit';
import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Member } from '../access';
import type { Db } from '../database';
import type { Storage } from '../storage';
import { readRange } from './range';

/**
 * Answers a request for a recording's stored bytes: whole (200), a range of them (206, 416) or
 * "you have it" (304). The bytes under an id never change, so the ETag is their SHA-256.
 */
export async function downloadRecording(
  db: Db,
  storage: Storage,
  member: Member,
  recordingId: string,
  request: Request,
): Promise<Response> {
  const file = await storedFile(db, member.teamId, recordingId);
  const etag = `"${file.sha256}"`;
  const headers = new Headers({
    'Accept-Ranges': 'bytes',
    // Kept by this browser only, and asked for again each time: who may have it can change.
    'Cache-Control': 'private, no-cache',
    'Content-Disposition': `attachment; filename*=UTF-8''${encodeURIComponent(file.name)}`,
    'Content-Type': 'application/octet-stream',
    ETag: etag,
    'X-Content-Type-Options': 'nosniff',
  });
  if (request.headers.get('if-none-match') === etag)
    return new Response(null, { status: 304, headers });

  const condition = request.headers.get('if-range');
  const wanted = condition === null || condition === etag ? request.headers.get('range') : null;
  const range = readRange(wanted, file.sizeBytes);
  if (range === 'unsatisfiable') {
    headers.set('Content-Range', `bytes */${file.sizeBytes}`);
    return new Response(null, { status: 416, headers });
  }
  const { start, end } = range === 'whole' ? { start: 0, end: file.sizeBytes - 1 } : range;
  headers.set('Content-Length', String(end - start + 1));
  if (range !== 'whole') headers.set('Content-Range', `bytes ${start}-${end}/${file.sizeBytes}`);
  const status = range === 'whole' ? 200 : 206;
  if (request.method === 'HEAD') return new Response(null, { status, headers });

  await mustBeStored(storage, file.storageKey);
  if (end - start + 1 === file.sizeBytes) {
    const subject = { type: 'recording', id: recordingId };
    await record(db, member, 'recording.downloaded', subject, { name: file.name });
  }
  const bytes = Readable.toWeb(storage.stream(file.storageKey, { start, end }));
  return new Response(bytes as ReadableStream<Uint8Array>, { status, headers });
}

async function storedFile(db: Db, teamId: string, recordingId: string) {
  const file = await db
    .selectFrom('recording')
    .select(['name', 'sha256', 'sizeBytes', 'storageKey'])
    .where('teamId', '=', teamId)
    .where('id', '=', recordingId)
    .executeTakeFirst();
  return file ?? notFound('recording');
}

async function mustBeStored(storage: Storage, key: string): Promise<void> {
  if (await storage.exists(key)) return;
  error(500, {
    code: 'file-missing',
    message:
      "The recording's file is missing from the server's data folder. Restore DATA_DIR from its backup.",
  });
}
