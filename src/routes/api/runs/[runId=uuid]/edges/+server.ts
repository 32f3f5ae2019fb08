import { error, json } from '@sveltejs/kit';
import { z } from 'zod';
import { edgesTsv } from '$lib/model/edge-table';
import { allow } from '$lib/server/access';
import { db } from '$lib/server/database';
import { edgesJson, findFinishedRun, plannedCorrection, runEdges } from '$lib/server/results';
import type { RequestHandler } from './$types';

const querySchema = z.object({
  format: z.enum(['tsv', 'json']).default('tsv'),
  correction: z.string().nullable().default(null),
});

/** The claimed edges of a run as TSV, or the JSON sidecar that describes them. */
export const GET: RequestHandler = async (event) => {
  const member = allow(event, 'result.read');
  const query = querySchema.safeParse(Object.fromEntries(event.url.searchParams));
  if (!query.success) {
    error(400, { code: 'bad-query', message: 'format must be tsv or json.' });
  }
  const found = await findFinishedRun(db, member, event.params.runId);
  const correction = plannedCorrection(found, query.data.correction);
  if (query.data.correction !== null && correction !== query.data.correction) {
    const planned = found.plan.body.test.corrections.join(', ');
    error(400, {
      code: 'bad-query',
      message: `correction "${query.data.correction}" is not in the plan; it names ${planned}.`,
    });
  }
  const edges = await runEdges(db, member, found.run.id, correction);
  const name = `edges_${correction}_${found.plan.hash.slice(0, 8)}.${query.data.format}`;
  const headers = { 'content-disposition': `attachment; filename="${name}"` };
  if (query.data.format === 'json') {
    return json(edgesJson(found, correction, edges.length), { headers });
  }
  return new Response(edgesTsv(edges, found.facts.axes, found.plan.body.measure), {
    headers: { ...headers, 'content-type': 'text/tab-separated-values; charset=utf-8' },
  });
};
