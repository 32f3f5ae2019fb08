import { randomUUID } from 'node:crypto';
import type { Handle } from '@sveltejs/kit';

/** First of all: what ties a log line, an error page and a person's report together. */
export const requestId: Handle = async ({ event, resolve }) => {
  event.locals.requestId = randomUUID();
  const response = await resolve(event);
  response.headers.set('X-Request-Id', event.locals.requestId);
  return response;
};
