import js from '@eslint/js';
import prettier from 'eslint-config-prettier';
import svelte from 'eslint-plugin-svelte';
import globals from 'globals';
import ts from 'typescript-eslint';
import svelteConfig from './svelte.config.js';

export default ts.config(
  { ignores: ['build/', '.svelte-kit/', '.data/', 'test-results/', 'node_modules/'] },
  // AssemblyScript has types and built-ins of its own; its compiler checks it. The other is made.
  { ignores: ['workers/kernels/wasm/', 'workers/kernels/compiled.ts'] },
  js.configs.recommended,
  ...ts.configs.strict,
  ...svelte.configs.recommended,
  prettier,
  ...svelte.configs.prettier,
  {
    languageOptions: { globals: { ...globals.browser, ...globals.node } },
    rules: {
      // TypeScript itself reports undefined names, and knows the DOM's types.
      'no-undef': 'off',
      // Index access in numeric loops is checked by the loop bounds.
      '@typescript-eslint/no-non-null-assertion': 'off',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_' }],
      // Paths are served from the root, and links are checked by the browser tests.
      'svelte/no-navigation-without-resolve': 'off',
    },
  },
  {
    files: ['**/*.svelte', '**/*.svelte.ts', '**/*.svelte.js'],
    languageOptions: {
      parserOptions: { extraFileExtensions: ['.svelte'], parser: ts.parser, svelteConfig },
    },
  },
  {
    // The engine is pure: no application code, no DOM, no Node, so that it runs anywhere.
    files: ['workers/engine/**', 'workers/kernels/**'],
    rules: {
      'no-restricted-imports': [
        'error',
        { patterns: ['$lib/*', '$app/*', 'svelte', 'svelte/*', '**/src/**', 'node:*'] },
      ],
      'no-restricted-globals': ['error', 'window', 'document', 'process', 'fetch'],
    },
  },
);
