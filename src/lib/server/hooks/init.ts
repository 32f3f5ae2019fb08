import type { ServerInit } from '@sveltejs/kit';
import { forgetExpiredSessions } from '../accounts/sessions';
import { config } from '../config';
import { log } from '../log';

/** Runs once before the first request. */
export const init: ServerInit = async () => {
  await forgetExpiredSessions();
  log.info({ mode: config.mode, origin: config.origin }, 'ready');
};
