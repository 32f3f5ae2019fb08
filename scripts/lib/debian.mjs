import { spawnSync } from 'node:child_process';
import { existsSync, readdirSync } from 'node:fs';
import path from 'node:path';

/** What the scripts need of Debian: how to see that it is there, and the package that brings it. */
export const needs = {
  postgresql: { package: 'postgresql', present: () => postgresBin() !== null },
  chromium: { package: 'chromium', present: () => existsSync('/usr/bin/chromium') },
  scipy: {
    package: 'python3-scipy',
    present: () =>
      spawnSync('/usr/bin/python3', ['-c', 'import scipy'], { stdio: 'ignore' }).status === 0,
  },
};

/** The folder of the newest PostgreSQL server programs, or null. */
export function postgresBin() {
  const root = '/usr/lib/postgresql';
  if (!existsSync(root)) return null;
  const versions = readdirSync(root)
    .filter((version) => existsSync(path.join(root, version, 'bin', 'initdb')))
    .sort((a, b) => Number(b) - Number(a));
  return versions.length ? path.join(root, versions[0], 'bin') : null;
}

/** Installs what is missing as root; otherwise ends with a message that names the packages. */
export function ensureDebian(...wanted) {
  const missing = wanted.filter((need) => !need.present()).map((need) => need.package);
  if (missing.length === 0) return;
  const names = missing.join(' ');
  if (process.getuid?.() !== 0) {
    throw new Error(
      `Missing Debian packages: ${names}. Install them: sudo apt-get install ${names}`,
    );
  }
  console.log(`installing from Debian: ${names}`);
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  for (const args of [
    ['update', '-qq'],
    ['install', '-y', '-qq', '--no-install-recommends', ...missing],
  ]) {
    const done = spawnSync('apt-get', args, { env, encoding: 'utf8' });
    if (done.status !== 0) {
      throw new Error(`apt-get ${args.join(' ')} failed:\n${done.stderr ?? done.error}`);
    }
  }
}
