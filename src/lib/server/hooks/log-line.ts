import type { Handle } from '@sveltejs/kit';
import { log } from '../log';

/** One line a request. The route, not the address: addresses of mailed links carry tokens. */
export const logLine: Handle = async ({ event, resolve }) => {
  const start = performance.now();
  const response = await resolve(event);
  log.info({
    requestId: event.locals.requestId,
    method: event.request.method,
    route: event.route.id ?? 'none',
    status: response.status,
    durationMs: Math.round(performance.now() - start),
    personId: event.locals.person?.id,
    teamId: event.locals.member?.teamId,
  });
  return response;
};
