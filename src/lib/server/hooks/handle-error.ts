import { randomUUID } from 'node:crypto';
import type { HandleServerError } from '@sveltejs/kit';
import { log } from '../log';

/** What nobody foresaw: the log gets everything, the person a random id to report. */
export const handleError: HandleServerError = ({ error, event, status, message }) => {
  if (status === 404) {
    return { code: 'not-found', message: 'There is no such page.' };
  }
  // What kit itself refuses (wrong content type, too large): the asker's doing, and in the log as
  // any other request.
  if (status < 500) {
    return { code: 'refused', message: `The request was refused: ${message}.` };
  }
  const id = randomUUID().slice(0, 8);
  log.error({
    err: error,
    errorId: id,
    requestId: event.locals.requestId,
    method: event.request.method,
    route: event.route.id ?? 'none',
    personId: event.locals.person?.id,
    teamId: event.locals.member?.teamId,
  });
  return {
    code: 'unexpected',
    message: 'Something went wrong on our side. Nothing you saved before is lost.',
    id,
  };
};
