/**
 * Bundles what runs without a browser: the command `contrast` and the engine's thread, whole, so
 * that they start at once and need neither a build of the application nor its packages' files.
 */
import { createHash } from 'node:crypto';
import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
} from 'node:fs';
import path from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { filesBelow } from './files.mjs';
import { ensureKernels } from './kernels.mjs';
import { root } from './root.mjs';

const cache = path.join(root, 'node_modules', '.cache', 'nullwright');
const sources = [
  'workers',
  'src/lib',
  'scripts/contrast',
  'package-lock.json',
  fileURLToPath(import.meta.url),
];
const entries = { contrast: 'scripts/contrast/main.ts', thread: 'workers/engine-thread.ts' };

function sourceHash() {
  const hash = createHash('sha256');
  for (const source of sources) {
    for (const file of filesBelow(path.resolve(root, source))) {
      if (/\.svelte(\.ts)?$/.test(file)) continue;
      hash.update(path.relative(root, file)).update(readFileSync(file));
    }
  }
  return hash.digest('hex').slice(0, 16);
}

async function bundle(folder) {
  const { build } = await import('vite');
  const at = (place) => path.join(root, place);
  await build({
    root,
    configFile: false,
    envFile: false,
    publicDir: false,
    logLevel: 'error',
    resolve: {
      alias: { $engine: at('workers/engine'), $workers: at('workers'), $lib: at('src/lib') },
    },
    ssr: { noExternal: true },
    build: {
      ssr: true,
      target: 'node20',
      outDir: folder,
      minify: false,
      rollupOptions: {
        input: Object.fromEntries(Object.entries(entries).map(([name, file]) => [name, at(file)])),
        output: { entryFileNames: '[name].mjs', chunkFileNames: '[name]-[hash].mjs' },
      },
    },
  });
}

/**
 * Bundles unless the last bundle came from the same sources, and says where the two modules lie.
 * Two that bundle at the same time do not meet: each writes a folder of its own.
 */
export async function ensureHeadless() {
  ensureKernels();
  const folder = path.join(cache, `headless-${sourceHash()}`);
  if (!existsSync(folder)) {
    mkdirSync(cache, { recursive: true });
    const older = readdirSync(cache).filter((name) => name.startsWith('headless-'));
    const fresh = mkdtempSync(path.join(cache, 'making-'));
    try {
      await bundle(fresh);
      if (!existsSync(folder)) renameSync(fresh, folder);
      for (const name of older) rmSync(path.join(cache, name), { recursive: true, force: true });
    } finally {
      rmSync(fresh, { recursive: true, force: true });
    }
  }
  return {
    contrast: pathToFileURL(path.join(folder, 'contrast.mjs')),
    thread: pathToFileURL(path.join(folder, 'thread.mjs')),
  };
}
