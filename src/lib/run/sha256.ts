import type { HashReply } from './hash-worker';
import { RunError } from './errors';

/** SHA-256 of a Blob of any size in hexadecimal, made by a worker that ends with the answer. */
export function sha256OfBlob(
  blob: Blob,
  onProgress: (hashedBytes: number) => void = () => undefined,
): Promise<string> {
  const worker = new Worker(new URL('./hash-worker.ts', import.meta.url), { type: 'module' });
  return new Promise<string>((resolve, reject) => {
    const fail = (message: string): void =>
      reject(new RunError('worker-crashed', `Hashing the recording failed: ${message}`));
    worker.onmessage = ({ data }: MessageEvent<HashReply>) => {
      if (data.failure !== undefined) return fail(data.failure);
      onProgress(data.hashedBytes);
      if (data.sha256 !== undefined) resolve(data.sha256);
    };
    worker.onerror = (event) => fail(event.message);
    worker.postMessage(blob);
  }).finally(() => worker.terminate());
}
