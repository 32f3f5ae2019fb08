import { defineConfig } from 'playwright/test';

// The server under test is started by scripts/test.mjs, which passes its address.
const baseURL = process.env['BASE_URL'];
if (!baseURL)
  throw new Error('BASE_URL is missing: run the browser tests through `npm test -- browser`.');

export default defineConfig({
  testDir: 'tests/browser',
  outputDir: 'test-results/browser',
  // Runs use every core themselves; a second browser beside them would only slow both.
  workers: 1,
  timeout: 180_000,
  expect: { timeout: 15_000 },
  retries: 0,
  reporter: [['list'], ['json']],
  use: {
    baseURL,
    viewport: { width: 1440, height: 900 },
    actionTimeout: 15_000,
    screenshot: 'only-on-failure',
    launchOptions: {
      executablePath: '/usr/bin/chromium',
      args: ['--no-sandbox', '--disable-gpu', '--disable-background-networking'],
    },
  },
});
