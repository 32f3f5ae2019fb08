/**
 * `npm test`: the set-up of `npm start` against databases of its own, then every kind of test.
 * `npm test -- lint engine` runs only the named kinds. The last line is `N passed, N failed`.
 */
import { spawnSync } from 'node:child_process';
import { mkdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import { ensureDatabase } from './lib/database.mjs';
import { ensureDebian, needs } from './lib/debian.mjs';
import { applicationEnv } from './lib/environment.mjs';
import { ensurePackages } from './lib/packages.mjs';
import { ensureKernels } from './lib/kernels.mjs';
import { freePort } from './lib/ports.mjs';
import { startPostgres } from './lib/postgres.mjs';
import { root } from './lib/root.mjs';
import { endServer, ensureBuild, migrate, seedDemo, serve } from './lib/steps.mjs';
import { playwrightTally, vitestTally } from './lib/tally.mjs';

const reports = path.join(root, 'test-results');
const testData = path.resolve(root, '.data', 'test');
const total = { passed: 0, failed: 0, skipped: 0 };
let postgres = null;
let application = null;

async function end(code) {
  if (application) await endServer(application);
  postgres?.stop();
  process.exit(code);
}
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, () => void end(1));

function tool(name, args, env = {}) {
  const program = path.join(root, 'node_modules', '.bin', name);
  const done = spawnSync(program, args, {
    cwd: root,
    stdio: 'inherit',
    env: { ...process.env, ...env },
  });
  return done.status === 0;
}

function add(kind, tally) {
  for (const key of Object.keys(total)) total[key] += tally[key];
  console.log(`${kind}: ${tally.passed} passed, ${tally.failed} failed, ${tally.skipped} skipped`);
}

/** A tool that only says yes or no counts as one test. */
function check(kind, ...commands) {
  const passed = commands.map(([name, ...args]) => tool(name, args)).every(Boolean);
  add(kind, { passed: passed ? 1 : 0, failed: passed ? 0 : 1, skipped: 0 });
}

function vitest(kind, env = {}) {
  const report = path.join(reports, `${kind}.json`);
  const finished = tool(
    'vitest',
    [
      'run',
      '--project',
      kind,
      '--reporter=default',
      '--reporter=json',
      `--outputFile.json=${report}`,
    ],
    env,
  );
  const tally = vitestTally(report);
  // A crash after the last test (an unhandled rejection) leaves a green report behind.
  if (!finished && tally.failed === 0) tally.failed = 1;
  add(kind, tally);
}

async function testDatabase(name) {
  postgres ??= await startPostgres(testData, { durable: false });
  return ensureDatabase(postgres, name, { fresh: true });
}

async function serverTests() {
  const databaseUrl = await testDatabase('nullwright_server');
  const data = path.join(testData, 'server');
  rmSync(data, { recursive: true, force: true });
  vitest('server', {
    DATABASE_URL: databaseUrl,
    DATA_DIR: data,
    NULLWRIGHT_MODE: 'test',
    LOG_LEVEL: 'silent',
  });
}

async function browserTests() {
  ensureDebian(needs.chromium);
  ensureBuild();
  const databaseUrl = await testDatabase('nullwright_browser');
  const data = path.join(testData, 'browser');
  rmSync(data, { recursive: true, force: true });
  const host = '127.0.0.1';
  const port = await freePort(host);
  const env = applicationEnv({ databaseUrl, port, host, mode: 'demo', data });
  migrate(databaseUrl);
  seedDemo({ ...env, LOG_LEVEL: 'warn' });
  application = await serve({ ...env, LOG_LEVEL: 'warn' });
  const report = path.join(reports, 'browser.json');
  const finished = tool('playwright', ['test'], {
    BASE_URL: env.ORIGIN,
    DATABASE_URL: databaseUrl,
    DATA_DIR: data,
    PLAYWRIGHT_JSON_OUTPUT_NAME: report,
  });
  const ended = await endServer(application);
  application = null;
  const tally = playwrightTally(report);
  if (!ended) {
    console.error('The server did not end when it was asked to.');
    tally.failed += 1;
  }
  if (!finished && tally.failed === 0) tally.failed = 1;
  add('browser', tally);
}

const kinds = {
  types: () =>
    check('types', ['svelte-kit', 'sync'], ['svelte-check', '--tsconfig', './tsconfig.json']),
  lint: () => check('lint', ['eslint', '.'], ['prettier', '--check', '.', '--log-level', 'warn']),
  engine: () => vitest('engine'),
  reference: () => {
    ensureDebian(needs.scipy);
    vitest('reference');
  },
  server: serverTests,
  browser: browserTests,
};

async function main() {
  const wanted = process.argv.slice(2);
  const unknown = wanted.find((name) => !(name in kinds));
  if (unknown) {
    throw new Error(
      `No kind of test is called ${unknown}; there are ${Object.keys(kinds).join(', ')}.`,
    );
  }
  ensurePackages();
  ensureKernels();
  rmSync(reports, { recursive: true, force: true });
  mkdirSync(reports, { recursive: true });
  if (!process.env.RECORDINGS_DIR) {
    console.log(
      'RECORDINGS_DIR is unset: tests that need the real recordings say that they are skipped',
    );
  }
  for (const [name, run] of Object.entries(kinds)) {
    if (wanted.length > 0 && !wanted.includes(name)) continue;
    console.log(`\n== ${name}`);
    await run();
  }
  const skipped = total.skipped > 0 ? `, ${total.skipped} skipped` : '';
  console.log(`\n${total.passed} passed, ${total.failed} failed${skipped}`);
  await end(total.failed === 0 && total.passed > 0 ? 0 : 1);
}

main().catch(async (problem) => {
  console.error(problem instanceof Error ? problem.message : problem);
  console.log(`${total.passed} passed, ${total.failed + 1} failed`);
  await end(1);
});
