import { json } from '@sveltejs/kit';
import { runChangeSchema } from '$lib/model/run';
import { allow } from '$lib/server/access';
import { db } from '$lib/server/database';
import { readJson } from '$lib/server/read-json';
import { changeRun, getRun } from '$lib/server/runs';
import type { RequestHandler } from './$types';

export const GET: RequestHandler = async (event) => {
  const member = allow(event, 'contrast.read');
  return json(await getRun(db, member.teamId, event.params.runId));
};

export const PATCH: RequestHandler = async (event) => {
  const member = allow(event, 'run.write');
  const change = await readJson(event.request, runChangeSchema);
  await changeRun(db, member, event.params.runId, change);
  return new Response(null, { status: 204 });
};
