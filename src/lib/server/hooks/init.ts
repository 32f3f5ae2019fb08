import type { ServerInit } from '@sveltejs/kit';
import { forgetExpiredSessions } from '../accounts/sessions';
import { config } from '../config';
import { log } from '../log';
import { cleanStorage } from '../storage';
import { cleanUploads } from '../uploads';
import { setHeadersOfFiles } from './security-headers';

/** Runs once before the first request. */
export const init: ServerInit = async () => {
  setHeadersOfFiles();
  await Promise.all([forgetExpiredSessions(), cleanUploads(), cleanStorage()]);
  log.info({ mode: config.mode, origin: config.origin }, 'ready');
};
