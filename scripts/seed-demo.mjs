/**
 * Fills an empty database with the demo laboratory. The seed goes through the application's own
 * server modules, so Vite loads it with the application's aliases and environment.
 */
import { createServer } from 'vite';
import { ensureHeadless } from './lib/headless.mjs';
import { root } from './lib/root.mjs';

const vite = await createServer({
  root,
  appType: 'custom',
  logLevel: 'error',
  server: { middlewareMode: true, hmr: false, watch: null, ws: false },
  optimizeDeps: { noDiscovery: true },
});
try {
  const { seedDemo } = await vite.ssrLoadModule('/scripts/demo/seed.ts');
  const { thread } = await ensureHeadless();
  await seedDemo((line) => console.log(line), thread);
} finally {
  await vite.close();
}
