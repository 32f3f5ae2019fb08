import { Worker } from 'node:worker_threads';
import { wrap } from 'comlink';
import nodeEndpoint from 'comlink/dist/esm/node-adapter';
import type { EngineWorkerApi, ThreadRecording } from '../protocol';
import { WorkerPool } from './pool';

/** A pool of threads under Node. `script` is the bundled workers/engine-thread.ts. */
export function threadPool(size: number, script: URL): WorkerPool<ThreadRecording> {
  return new WorkerPool<ThreadRecording>({
    size,
    createWorker(onBroken) {
      const thread = new Worker(script, { name: 'engine' });
      thread.on('error', (error) => onBroken(error.message));
      thread.on('messageerror', () => onBroken('its answer could not be read'));
      thread.on('exit', () => onBroken('it ended'));
      const api = wrap<EngineWorkerApi<ThreadRecording>>(nodeEndpoint(thread));
      return { api, terminate: () => void thread.terminate() };
    },
  });
}
