import { error, json } from '@sveltejs/kit';
import { z } from 'zod';
import { allow } from '$lib/server/access';
import { db } from '$lib/server/database';
import { findFinishedRun, pairValues, plannedCorrection } from '$lib/server/results';
import { storage } from '$lib/server/storage';
import type { RequestHandler } from './$types';

const querySchema = z.object({
  point: z.coerce.number().int().nonnegative().optional(),
  correction: z.string().optional(),
});

/** One z and adjusted p a pair: at `point` (f * timeCount + t), or at each pair's own peak. */
export const GET: RequestHandler = async (event) => {
  const member = allow(event, 'result.read');
  const query = querySchema.safeParse(Object.fromEntries(event.url.searchParams));
  const found = await findFinishedRun(db, member, event.params.runId);
  const { frequenciesHz, timesS } = found.facts.axes;
  const points = frequenciesHz.length * timesS.length;
  const point = query.data?.point ?? null;
  if (!query.success || (point !== null && point >= points)) {
    error(400, {
      code: 'bad-query',
      message: `point must be a whole number from 0 to ${points - 1}.`,
    });
  }
  const correction = plannedCorrection(found, query.data.correction ?? null);
  const values = await pairValues(db, storage, member, found, { correction, point });
  return json({
    z: Array.from(values.z),
    adjustedP: Array.from(values.adjustedP),
    point: Array.from(values.point),
  });
};
