import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { root } from './root.mjs';

const stamp = path.join(root, 'node_modules', '.nullwright-lock');

function lockHash() {
  return createHash('sha256')
    .update(readFileSync(path.join(root, 'package-lock.json')))
    .digest('hex');
}

/** Installs the npm packages when the lock file has changed since the last time. */
export function ensurePackages() {
  const wanted = lockHash();
  if (existsSync(stamp) && readFileSync(stamp, 'utf8') === wanted) return;
  console.log('installing npm packages');
  // Development packages build the application, so they are wanted in every mode.
  const done = spawnSync(
    'npm',
    ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'],
    {
      cwd: root,
      stdio: 'inherit',
    },
  );
  if (done.status !== 0) throw new Error('npm ci failed; its message stands above.');
  writeFileSync(stamp, wanted);
}
