import { Server, type Upload } from '@tus/server';
import { config } from '../config';
import { log } from '../log';
import type { Member } from '../access';
import type { Db } from '../database';
import { cleanUploads, uploadLocker, uploadStore } from './store';

/** Thrown inside the tus server, which sends `body` under `status_code`. */
interface TusError {
  status_code: number;
  body: string;
}

function refusal(status: number, code: string, message: string): TusError {
  return { status_code: status, body: JSON.stringify({ code, message }) };
}

const unknownUpload = () =>
  refusal(404, 'not-found', 'There is no such upload; it may have been cleaned after a day.');

/** True when this upload was begun by this person in this team. */
export function owns(member: Member, upload: Pick<Upload, 'metadata'>): boolean {
  const { teamId, personId } = upload.metadata ?? {};
  return teamId === member.teamId && personId === member.personId;
}

/**
 * Answers one request of the tus protocol (resumable upload, version 1.0.0) for a member who may
 * write recordings. A server object a request costs nothing and lets its hooks know the member.
 */
export function answerTus(db: Db, member: Member, request: Request): Promise<Response> {
  const server = new Server({
    path: '/api/uploads',
    datastore: uploadStore,
    locker: uploadLocker,
    maxSize: config.uploadLimitBytes,
    relativeLocation: true,
    // Same origin only: no page of another site may talk to this endpoint.
    allowedOrigins: () => false,
    async onUploadCreate(_request, upload) {
      await cleanUploads();
      return { metadata: await claimedBy(db, member, upload) };
    },
    async onIncomingRequest({ method }, uploadId) {
      if (method === 'POST') return;
      const upload = await uploadStore.getUpload(uploadId).catch(() => null);
      if (!upload || !owns(member, upload)) throw unknownUpload();
    },
    onResponseError: (_request, reason) => explained(reason),
  });
  return server.handleWeb(request);
}

/** What is kept about a new upload; the owner is the member, whatever the client wrote. */
async function claimedBy(db: Db, member: Member, upload: Upload) {
  if (!upload.size) throw refusal(400, 'empty-file', 'The file is empty. Choose another one.');
  const studyId = upload.metadata?.['studyId'] ?? '';
  const filename = upload.metadata?.['filename'] ?? '';
  if (filename.length < 1 || filename.length > 255) {
    throw refusal(400, 'bad-name', 'filename must have 1 to 255 characters. Rename the file.');
  }
  const study = /^[0-9a-f-]{36}$/.test(studyId)
    ? await db
        .selectFrom('study')
        .select('id')
        .where('teamId', '=', member.teamId)
        .where('id', '=', studyId)
        .executeTakeFirst()
    : undefined;
  if (!study) throw refusal(404, 'not-found', 'There is no such study in your team.');
  return { studyId, filename, teamId: member.teamId, personId: member.personId };
}

/** The shape that kit gives every other refusal, also for what the tus server itself refuses. */
function explained(reason: Error | TusError): TusError {
  if (!('status_code' in reason)) {
    log.error({ err: reason }, 'upload failed');
    return refusal(500, 'upload-failed', 'The server could not keep this part. Try again.');
  }
  const { status_code: status, body } = reason;
  if (body.startsWith('{')) return { status_code: status, body };
  if (status === 413) {
    return refusal(
      413,
      'too-large',
      `The file is above the limit of ${config.uploadLimitBytes} bytes.`,
    );
  }
  if (status === 404 || status === 410) return { ...unknownUpload(), status_code: status };
  return refusal(status, 'upload-refused', body.trim());
}
