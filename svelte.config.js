import adapter from '@sveltejs/adapter-node';
import { vitePreprocess } from '@sveltejs/vite-plugin-svelte';

/** @type {import('@sveltejs/kit').Config} */
const config = {
  preprocess: vitePreprocess(),
  kit: {
    adapter: adapter(),
    csp: {
      mode: 'auto',
      directives: {
        'default-src': ['self'],
        // Kernels are WebAssembly.
        'script-src': ['self', 'wasm-unsafe-eval'],
        'worker-src': ['self', 'blob:'],
        'connect-src': ['self', 'blob:'],
        // Figures set sizes and colours in style attributes.
        'style-src': ['self', 'unsafe-inline'],
        'img-src': ['self', 'data:', 'blob:'],
        'font-src': ['self', 'data:'],
        'object-src': ['none'],
        'base-uri': ['self'],
        'form-action': ['self'],
        'frame-ancestors': ['none'],
      },
    },
    alias: {
      $engine: 'workers/engine',
      $workers: 'workers',
    },
    typescript: {
      // Paths are relative to the generated file in .svelte-kit.
      config: (tsconfig) => ({
        ...tsconfig,
        include: [
          ...tsconfig.include,
          '../workers/**/*.ts',
          '../migrations/**/*.ts',
          '../scripts/**/*.ts',
          '../tests/**/*.ts',
          '../*.config.ts',
          '../eslint.config.js',
        ],
        // AssemblyScript: its own compiler checks it.
        exclude: [...tsconfig.exclude, '../workers/kernels/wasm/**'],
      }),
    },
  },
};

export default config;
