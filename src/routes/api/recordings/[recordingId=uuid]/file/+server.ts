import { allow } from '$lib/server/access';
import { db } from '$lib/server/database';
import { downloadRecording } from '$lib/server/recordings';
import { storage } from '$lib/server/storage';
import type { RequestHandler } from './$types';

export const GET: RequestHandler = (event) => {
  const member = allow(event, 'recording.download');
  return downloadRecording(db, storage, member, event.params.recordingId, event.request);
};

export const HEAD = GET;
