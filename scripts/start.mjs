/**
 * `npm start`: everything from a bare Debian machine with Node to the served product. Each step
 * is skipped where its work is done already, so that a second start takes seconds.
 */
import { ensureDatabase } from './lib/database.mjs';
import { applicationEnv, dataDir } from './lib/environment.mjs';
import { ensurePackages } from './lib/packages.mjs';
import { servePort } from './lib/ports.mjs';
import { startPostgres } from './lib/postgres.mjs';
import { endServer, ensureBuild, migrate, seedDemo, serve } from './lib/steps.mjs';

let postgres = null;
let application = null;
let ending = false;

/** Ends both servers, the application first, so that no request loses its database. */
async function end(code) {
  if (ending) return;
  ending = true;
  if (application) await endServer(application);
  postgres?.stop();
  process.exit(code);
}

process.on('SIGINT', () => void end(0));
process.on('SIGTERM', () => void end(0));
process.on('SIGHUP', () => void end(0));
// npm's shell does not pass a signal on that is sent to npm alone; it only goes away.
const npm = process.ppid;
setInterval(() => process.ppid !== npm && void end(0), 500).unref();

async function main() {
  const host = process.env.HOST ?? '127.0.0.1';
  const port = await servePort(process.env.PORT, host);
  ensurePackages();
  let databaseUrl = process.env.DATABASE_URL;
  if (!databaseUrl) {
    postgres = await startPostgres(dataDir());
    databaseUrl = await ensureDatabase(postgres, 'nullwright');
  }
  const env = applicationEnv({ databaseUrl, port, host, mode: 'demo', data: dataDir() });
  migrate(databaseUrl);
  if (env.NULLWRIGHT_MODE === 'demo') seedDemo(env);
  ensureBuild();
  if (ending) return;
  application = await serve(env);
  application.once('exit', (code) => {
    if (!ending) console.error(`The application ended by itself (${code}).`);
    void end(1);
  });
  console.log(`\nNullwright is ready: ${env.ORIGIN}`);
  if (env.NULLWRIGHT_MODE === 'demo') {
    const { demoAccounts, demoPassword } = await import('./demo/accounts.mjs');
    console.log('Demo accounts (simulated laboratory), password for all: ' + demoPassword);
    for (const account of demoAccounts) {
      console.log(`  ${account.email.padEnd(28)} ${account.role}`);
    }
  }
  console.log('Ctrl+C ends both servers.');
}

main().catch(async (problem) => {
  console.error(problem instanceof Error ? problem.message : problem);
  await end(1);
});
