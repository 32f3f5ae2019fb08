import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'vite';
import { ensureKernels } from './scripts/lib/kernels.mjs';

// The engine imports the compiled kernels: whatever serves or bundles it needs them first.
ensureKernels();

// Workers share phasors through SharedArrayBuffer, which browsers grant only to
// cross-origin isolated pages; the application sets the same headers in src/hooks.server.ts.
const isolation = {
  'Cross-Origin-Opener-Policy': 'same-origin',
  'Cross-Origin-Embedder-Policy': 'require-corp',
};

export default defineConfig({
  plugins: [tailwindcss(), sveltekit()],
  worker: { format: 'es' },
  server: { headers: isolation, fs: { allow: ['workers'] } },
  preview: { headers: isolation },
});
