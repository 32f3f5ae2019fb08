/**
 * Compiles the kernels of workers/kernels/wasm into a module of text, so that browsers' workers,
 * Node and tests all load them the same way, without fetch and without reading files.
 */
import { createHash } from 'node:crypto';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { spawnSync } from 'node:child_process';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { root } from './root.mjs';

const sources = path.join(root, 'workers/kernels/wasm');
const target = path.join(root, 'workers/kernels/compiled.ts');
const options = ['-O3', '--runtime', 'stub', '--enable', 'simd', '--noAssert', '--use', 'abort='];

function sourceHash() {
  const require = createRequire(import.meta.url);
  const { version } = require('assemblyscript/package.json');
  const hash = createHash('sha256').update(version).update(options.join(' '));
  for (const name of readdirSync(sources).sort()) {
    hash.update(name).update(readFileSync(path.join(sources, name)));
  }
  return hash.digest('hex');
}

function compile() {
  const place = mkdtempSync(path.join(tmpdir(), 'nullwright-kernels-'));
  try {
    const file = path.join(place, 'kernels.wasm');
    const compiler = path.join(root, 'node_modules/.bin/asc');
    const entry = path.join(sources, 'index.ts');
    const done = spawnSync(compiler, [entry, ...options, '--outFile', file], { stdio: 'inherit' });
    if (done.status !== 0) throw new Error('The kernels do not compile; see above.');
    return readFileSync(file).toString('base64');
  } finally {
    rmSync(place, { recursive: true, force: true });
  }
}

/** Compiles unless the last result came from the same sources and the same compiler. */
export function ensureKernels() {
  const mark = `// Made by scripts/build-kernels.mjs from ${sourceHash()}\n`;
  if (existsSync(target) && readFileSync(target, 'utf8').startsWith(mark)) return;
  writeFileSync(target, `${mark}export const compiledKernels =\n  '${compile()}';\n`);
}
