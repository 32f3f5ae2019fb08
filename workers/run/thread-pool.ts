import { MessageChannel, Worker } from 'node:worker_threads';
import { wrap, type Endpoint } from 'comlink';
import type { EngineWorkerApi, ThreadRecording } from '../protocol';
import { WorkerPool } from './pool';

/** A pool of threads under Node. `script` is the bundled workers/engine-thread.ts. */
export function threadPool(size: number, script: URL): WorkerPool<ThreadRecording> {
  return new WorkerPool<ThreadRecording>({
    size,
    createWorker(onBroken) {
      const { port1: here, port2: there } = new MessageChannel();
      const workerData = { port: there };
      const thread = new Worker(script, { name: 'engine', workerData, transferList: [there] });
      thread.on('error', (error) => onBroken(error.message));
      thread.on('exit', () => onBroken('it ended'));
      here.on('messageerror', () => onBroken('its answer could not be read'));
      // Node's ports are event targets too, which its types leave unsaid.
      const api = wrap<EngineWorkerApi<ThreadRecording>>(here as unknown as Endpoint);
      return { api, terminate: () => void thread.terminate() };
    },
  });
}
