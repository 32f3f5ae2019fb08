import { runSummarySchema } from '$lib/model/run';
import { allow } from '$lib/server/access';
import { db } from '$lib/server/database';
import { readJson } from '$lib/server/read-json';
import { answerRefusal, finishRun } from '$lib/server/runs';
import { storage } from '$lib/server/storage';
import type { RequestHandler } from './$types';

export const PUT: RequestHandler = async (event) => {
  const member = allow(event, 'run.write');
  const summary = await readJson(event.request, runSummarySchema);
  await finishRun(db, storage, member, event.params.runId, summary).catch(answerRefusal);
  return new Response(null, { status: 204 });
};
