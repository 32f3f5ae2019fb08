import { spawn, spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { filesBelow } from './files.mjs';
import { ensureKernels } from './kernels.mjs';
import { root } from './root.mjs';

/** Runs a program of the project's packages to its end; throws when it fails. */
export function runTool(name, args, env = {}) {
  const done = spawnSync(path.join(root, 'node_modules', '.bin', name), args, {
    cwd: root,
    stdio: 'inherit',
    env: { ...process.env, ...env },
  });
  if (done.status !== 0)
    throw new Error(`${name} ${args.join(' ')} failed; the reason stands above.`);
}

export function migrate(databaseUrl) {
  runTool('tsx', ['scripts/migrate.ts'], { DATABASE_URL: databaseUrl });
}

/** Fills an empty database with the demo laboratory; does nothing where it stands already. */
export function seedDemo(env) {
  const done = spawnSync(process.execPath, ['scripts/seed-demo.mjs'], {
    cwd: root,
    stdio: 'inherit',
    env: { ...process.env, ...env },
  });
  if (done.status !== 0) throw new Error('Seeding the demo failed; see above.');
}

const sources = [
  'src',
  'static',
  'workers',
  'scripts/lib/kernels.mjs',
  'package-lock.json',
  'svelte.config.js',
  'vite.config.ts',
  'tailwind.config.js',
  'tsconfig.json',
];

function sourceHash() {
  const hash = createHash('sha256');
  for (const source of sources) {
    for (const file of filesBelow(path.join(root, source))) {
      hash.update(path.relative(root, file)).update(readFileSync(file));
    }
  }
  return hash.digest('hex');
}

/** Builds the application unless the last build came from the same sources. */
export function ensureBuild() {
  ensureKernels();
  const stamp = path.join(root, 'build', '.source-hash');
  const wanted = sourceHash();
  if (existsSync(stamp) && readFileSync(stamp, 'utf8') === wanted) return;
  console.log('building');
  // What the bundler says of packages' own code fills screens; it is shown when the build fails.
  const built = spawnSync(path.join(root, 'node_modules', '.bin', 'vite'), ['build'], {
    cwd: root,
    encoding: 'utf8',
    maxBuffer: 64 * 1024 * 1024,
  });
  if (built.status !== 0) {
    throw new Error(`vite build failed:\n${built.stdout}\n${built.stderr}`);
  }
  writeFileSync(stamp, wanted);
}

/** Starts the built application and resolves once it answers its health check. */
export async function serve(env) {
  const child = spawn(process.execPath, ['scripts/lib/application.mjs'], {
    cwd: root,
    stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
    // Its own process group: Ctrl+C reaches the script alone, which ends both servers in order.
    detached: true,
    env: { ...process.env, ...env },
  });
  const health = `http://${env.HOST}:${env.PORT}/api/health`;
  await answers(health, child);
  return child;
}

async function answers(url, child) {
  const deadline = Date.now() + 60_000;
  while (Date.now() < deadline) {
    if (child.exitCode !== null) throw new Error('The server ended while it started; see above.');
    try {
      const response = await fetch(url);
      if (response.ok) return;
    } catch {
      // Not listening yet.
    }
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  child.kill();
  throw new Error(`No answer from ${url} within 60 s.`);
}

/**
 * Asks a server to end, waits for it, and insists after ten seconds. Answers whether it ended by
 * itself.
 */
export function endServer(child) {
  return new Promise((resolve) => {
    if (child.exitCode !== null || child.signalCode !== null) return resolve(true);
    const insist = setTimeout(() => child.kill('SIGKILL'), 10_000);
    child.once('exit', (_code, signal) => {
      clearTimeout(insist);
      resolve(signal !== 'SIGKILL');
    });
    child.kill('SIGTERM');
  });
}
