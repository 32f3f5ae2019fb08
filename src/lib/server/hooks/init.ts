import type { EventEmitter } from 'node:events';
import type { ServerInit } from '@sveltejs/kit';
import { forgetExpiredSessions } from '../accounts/sessions';
import { config } from '../config';
import { pool } from '../database';
import { log } from '../log';
import { cleanStorage } from '../storage';
import { cleanUploads } from '../uploads';
import { setHeadersOfFiles } from './security-headers';

/** Runs once before the first request. */
export const init: ServerInit = async () => {
  setHeadersOfFiles();
  await Promise.all([forgetExpiredSessions(), cleanUploads(), cleanStorage()]);
  endWithServer();
  log.info({ mode: config.mode, origin: config.origin }, 'ready');
};

/** Idle connections to the database would keep a server alive that has answered its last request. */
function endWithServer() {
  const emitter: EventEmitter = process;
  emitter.once('sveltekit:shutdown', () => void pool.end());
}
