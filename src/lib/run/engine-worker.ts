import { wrap } from 'comlink';
import type { EngineWorkerApi } from '$workers/protocol';
import type { OpenWorker } from '$workers/run/pool';

/** The one place that opens an engine worker; the bundler follows this address. */
export function createEngineWorker(onBroken: (reason: string) => void): OpenWorker {
  const worker = new Worker(new URL('../../../workers/engine-worker.ts', import.meta.url), {
    type: 'module',
    name: 'engine',
  });
  worker.addEventListener('error', (event) => onBroken(event.message || 'it could not be loaded'));
  worker.addEventListener('messageerror', () => onBroken('its answer could not be read'));
  return { api: wrap<EngineWorkerApi>(worker), terminate: () => worker.terminate() };
}
