import { json } from '@sveltejs/kit';
import { newRunSchema } from '$lib/model/run';
import { allow } from '$lib/server/access';
import { getContrast } from '$lib/server/contrasts';
import { db } from '$lib/server/database';
import { readJson } from '$lib/server/read-json';
import { createRun, listRuns } from '$lib/server/runs';
import type { RequestHandler } from './$types';

export const GET: RequestHandler = async (event) => {
  const member = allow(event, 'contrast.read');
  const { id } = await getContrast(db, member, event.params.contrastId);
  return json({ runs: await listRuns(db, member.teamId, id) });
};

export const POST: RequestHandler = async (event) => {
  const member = allow(event, 'run.write');
  const asked = await readJson(event.request, newRunSchema);
  const run = await createRun(db, member, event.params.contrastId, asked);
  return json(run, { status: 201, headers: { Location: `/api/runs/${run.id}` } });
};
