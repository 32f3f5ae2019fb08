import path from 'node:path';
import { root } from './root.mjs';

/** Where everything the application writes lies: recordings, maps, mails, the database. */
export function dataDir(...below) {
  return path.resolve(root, process.env.DATA_DIR ?? '.data', ...below);
}

/** The variables a served application gets; what the caller's environment sets wins. */
export function applicationEnv({ databaseUrl, port, host, mode, data }) {
  const shownHost = host === '127.0.0.1' || host === '0.0.0.0' ? 'localhost' : host;
  return {
    NODE_ENV: 'production',
    ORIGIN: process.env.ORIGIN ?? `http://${shownHost}:${port}`,
    // Uploads come in parts of a few megabytes and maps in one piece; the application's own
    // limits are checked in their endpoints.
    BODY_SIZE_LIMIT: process.env.BODY_SIZE_LIMIT ?? '512M',
    SHUTDOWN_TIMEOUT: '5',
    NULLWRIGHT_MODE: process.env.NULLWRIGHT_MODE ?? mode,
    DATABASE_URL: databaseUrl,
    DATA_DIR: data,
    HOST: host,
    PORT: String(port),
  };
}
