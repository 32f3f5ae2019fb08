import { error, json } from '@sveltejs/kit';
import { allow } from '$lib/server/access';
import { db } from '$lib/server/database';
import { storage } from '$lib/server/storage';
import { answerTus, finishSchema, finishUpload } from '$lib/server/uploads';
import type { RequestHandler } from './$types';

/** The tus protocol: HEAD asks how far an upload is, PATCH sends more, DELETE gives it up. */
const tus: RequestHandler = (event) => {
  const member = allow(event, 'recording.write');
  return answerTus(db, member, event.request);
};

export const HEAD = tus;
export const PATCH = tus;
export const DELETE = tus;
export const OPTIONS = tus;

/** Without a path, tus creates an upload; with an upload's id, a complete one becomes a recording. */
export const POST: RequestHandler = async (event) => {
  const member = allow(event, 'recording.write');
  if (event.params.path === '') return answerTus(db, member, event.request);
  const body = finishSchema.safeParse(await event.request.json().catch(() => null));
  if (!body.success) {
    const [issue] = body.error.issues;
    const message = `${issue?.path.join('.') || 'body'}: ${issue?.message ?? 'is not JSON'}`;
    error(400, { code: 'bad-request', message });
  }
  const ingested = await finishUpload(db, storage, member, event.params.path, body.data);
  return json(ingested, { status: ingested.kind === 'stored' ? 201 : 200 });
};
