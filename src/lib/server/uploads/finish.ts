import { error } from '@sveltejs/kit';
import { z } from 'zod';
import { participantCodePattern, participantCodeRule } from '$lib/model/participant';
import type { Member } from '../access';
import type { Db } from '../database';
import { ingestRecording, IngestError, type Ingested, type SidecarFiles } from '../recordings';
import type { Storage } from '../storage';
import { uploadStore } from './store';
import { owns } from './tus';

const sidecar = z.object({ name: z.string().min(1).max(255), text: z.string() });

/** What a client says when all bytes of an upload are here. */
export const finishSchema = z.object({
  participant: z.string().regex(participantCodePattern, participantCodeRule),
  keepIdentification: z.boolean(),
  sidecars: z
    .object({
      events: sidecar.optional(),
      channels: sidecar.optional(),
      electrodes: sidecar.optional(),
    })
    .default({}),
});
export type FinishRequest = z.infer<typeof finishSchema>;

/** Asked again while the first is still at work (a broken connection), it joins the first. */
const underWay = new Map<string, Promise<Ingested>>();

/**
 * Makes a recording of a complete upload. The upload is given up when it is stored, known already
 * or of no use; when only what stands beside it is wrong, it waits for a second attempt.
 */
export async function finishUpload(
  db: Db,
  storage: Storage,
  member: Member,
  uploadId: string,
  request: FinishRequest,
): Promise<Ingested> {
  const upload = await completeUpload(member, uploadId);
  let work = underWay.get(uploadId);
  if (!work) {
    work = ingestUpload(db, storage, member, upload, request).finally(() =>
      underWay.delete(uploadId),
    );
    underWay.set(uploadId, work);
  }
  return work;
}

async function completeUpload(member: Member, uploadId: string) {
  const upload = await uploadStore.getUpload(uploadId).catch(() => null);
  if (!upload || !owns(member, upload)) {
    const message = 'There is no such upload; it may have been stored already, or cleaned.';
    error(404, { code: 'not-found', message });
  }
  if (upload.offset !== upload.size) {
    const message = `${upload.offset} of ${upload.size} bytes are here. Send the rest first.`;
    error(409, { code: 'upload-incomplete', message });
  }
  return upload;
}

async function ingestUpload(
  db: Db,
  storage: Storage,
  member: Member,
  upload: Awaited<ReturnType<typeof completeUpload>>,
  request: FinishRequest,
): Promise<Ingested> {
  try {
    const ingested = await ingestRecording(db, storage, member, {
      studyId: upload.metadata?.['studyId'] ?? '',
      participantCode: request.participant,
      name: upload.metadata?.['filename'] ?? '',
      path: upload.storage?.path ?? '',
      keepIdentification: request.keepIdentification,
      sidecars: encoded(request.sidecars),
    });
    await uploadStore.remove(upload.id);
    return ingested;
  } catch (reason) {
    if (!(reason instanceof IngestError)) throw reason;
    if (reason.spoilsFile) await uploadStore.remove(upload.id);
    error(422, { code: reason.code, message: reason.message });
  }
}

function encoded(sidecars: FinishRequest['sidecars']): SidecarFiles {
  const files: SidecarFiles = {};
  for (const kind of ['events', 'channels', 'electrodes'] as const) {
    const given = sidecars[kind];
    if (given) files[kind] = { name: given.name, bytes: new TextEncoder().encode(given.text) };
  }
  return files;
}
