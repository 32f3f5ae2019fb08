/** `npm run dev`: the database and demo as `npm start` has them, with Vite's development server. */
import { spawn } from 'node:child_process';
import path from 'node:path';
import { ensureDatabase } from './lib/database.mjs';
import { applicationEnv, dataDir } from './lib/environment.mjs';
import { ensurePackages } from './lib/packages.mjs';
import { servePort } from './lib/ports.mjs';
import { startPostgres } from './lib/postgres.mjs';
import { root } from './lib/root.mjs';
import { migrate, seedDemo } from './lib/steps.mjs';

const host = '127.0.0.1';
const port = await servePort(process.env.PORT, host);
ensurePackages();
const postgres = process.env.DATABASE_URL ? null : await startPostgres(dataDir());
const databaseUrl = process.env.DATABASE_URL ?? (await ensureDatabase(postgres, 'nullwright'));
const env = applicationEnv({ databaseUrl, port, host, mode: 'development', data: dataDir() });
migrate(databaseUrl);
seedDemo(env);

const vite = spawn(
  process.execPath,
  [path.join(root, 'node_modules/vite/bin/vite.js'), 'dev', '--host', host, '--port', String(port)],
  {
    cwd: root,
    stdio: 'inherit',
    detached: true,
    env: { ...process.env, ...env, NODE_ENV: 'development' },
  },
);
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'])
  process.on(signal, () => vite.kill('SIGTERM'));
vite.once('exit', (code) => {
  postgres?.stop();
  process.exit(code ?? 0);
});
