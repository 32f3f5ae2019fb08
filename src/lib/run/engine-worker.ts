/** The one place that opens an engine worker; the bundler follows this address. */
export const createEngineWorker = (): Worker =>
  new Worker(new URL('../../../workers/engine-worker.ts', import.meta.url), {
    type: 'module',
    name: 'engine',
  });
