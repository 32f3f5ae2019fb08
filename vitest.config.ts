import { sveltekit } from '@sveltejs/kit/vite';
import { defineConfig } from 'vitest/config';
import { ensureKernels } from './scripts/lib/kernels.mjs';

// The engine imports the compiled kernels.
ensureKernels();

// One project a kind of test; browser tests run under playwright.config.ts.
const project = (name: string, extra: object = {}) => ({
  extends: true as const,
  test: { name, include: [`tests/${name}/**/*.test.ts`], ...extra },
});

export default defineConfig({
  plugins: [sveltekit()],
  test: {
    environment: 'node',
    testTimeout: 60_000,
    projects: [
      project('engine'),
      project('reference'),
      project('server', { globalSetup: ['tests/server/setup.ts'] }),
    ],
  },
});
