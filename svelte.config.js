import adapter from '@sveltejs/adapter-node';
import { vitePreprocess } from '@sveltejs/vite-plugin-svelte';

/** @type {import('@sveltejs/kit').Config} */
const config = {
  preprocess: vitePreprocess(),
  kit: {
    adapter: adapter(),
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
      }),
    },
  },
};

export default config;
