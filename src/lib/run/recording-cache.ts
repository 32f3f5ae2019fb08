import { RunError } from './errors';
import { sha256OfBlob } from './sha256';

/**
 * Recordings in the browser: fetched once, kept by hash in the Cache API, and never handed out
 * before their SHA-256 was found right. They are health data on a machine that may be shared,
 * so signing out calls `clearCache`.
 */
const cacheName = 'nullwright-recordings';

export interface RecordingRef {
  id: string;
  sha256: string;
  name: string;
  sizeBytes: number;
}

export interface FetchProgress {
  step: 'fetching' | 'verifying';
  doneBytes: number;
  totalBytes: number;
}

export interface FetchOptions {
  onProgress?: (progress: FetchProgress) => void;
  signal?: AbortSignal;
}

/** Blobs verified since the page was opened, so that a second use does not hash again. */
const verified = new Map<string, Promise<Blob>>();

/** The recording's bytes, verified. Rejects with a RunError that says what to do. */
export function fetchRecording(ref: RecordingRef, options: FetchOptions = {}): Promise<Blob> {
  const known = verified.get(ref.sha256);
  if (known) return known;
  const fresh = obtain(ref, options);
  verified.set(ref.sha256, fresh);
  fresh.catch(() => verified.delete(ref.sha256));
  return fresh;
}

/** Whether this browser keeps the recording already, so that reading it costs no download. */
export async function isKept(ref: RecordingRef): Promise<boolean> {
  return verified.has(ref.sha256) || (await readKept(ref)) !== null;
}

/** Forgets every kept recording; never throws, since signing out must not fail over it. */
export async function clearCache(): Promise<void> {
  verified.clear();
  if (typeof caches !== 'undefined') await caches.delete(cacheName).catch(() => false);
}

async function obtain(ref: RecordingRef, options: FetchOptions): Promise<Blob> {
  const kept = await readKept(ref);
  if (kept) {
    if (await isWhole(kept, ref, options)) return kept;
    await evict(ref);
  }
  const blob = await download(ref, options);
  if (await isWhole(blob, ref, options)) return blob;
  await evict(ref);
  throw new RunError(
    'recording-changed',
    `${ref.name} arrived with other bytes than the plan names (${blob.size} bytes received, ` +
      `${ref.sizeBytes} expected). Try again; if it stays, upload the recording again.`,
  );
}

async function isWhole(blob: Blob, ref: RecordingRef, options: FetchOptions): Promise<boolean> {
  if (blob.size !== ref.sizeBytes) return false;
  const report = (doneBytes: number): void =>
    options.onProgress?.({ step: 'verifying', doneBytes, totalBytes: ref.sizeBytes });
  report(0);
  return (await sha256OfBlob(blob, report)) === ref.sha256;
}

async function download(ref: RecordingRef, options: FetchOptions): Promise<Blob> {
  const body = await openDownload(ref, options);
  const cache = await openCache();
  if (!cache) return new Response(body).blob();
  try {
    // Streams to the disk: the file is never whole in the page's memory.
    await cache.put(keyOf(ref), new Response(body));
  } catch (thrown) {
    if (!(thrown instanceof DOMException && thrown.name === 'QuotaExceededError')) {
      throw asNetworkError(ref, thrown, options.signal);
    }
    return new Response(await openDownload(ref, options)).blob();
  }
  const kept = await readKept(ref);
  if (kept) return kept;
  return new Response(await openDownload(ref, options)).blob();
}

async function openDownload(
  ref: RecordingRef,
  { onProgress, signal }: FetchOptions,
): Promise<ReadableStream<Uint8Array>> {
  const response = await fetch(`/api/recordings/${ref.id}/file`, {
    cache: 'no-store',
    ...(signal && { signal }),
  }).catch((thrown: unknown) => {
    throw asNetworkError(ref, thrown, signal);
  });
  if (!response.ok || !response.body) {
    throw new RunError(
      response.status === 404 ? 'recording-missing' : 'network',
      response.status === 404
        ? `${ref.name} is no longer stored. Upload it to the study again.`
        : `The server did not hand out ${ref.name} (status ${response.status}). Try again.`,
    );
  }
  let doneBytes = 0;
  return response.body.pipeThrough(
    new TransformStream<Uint8Array, Uint8Array>({
      transform(chunk, controller) {
        doneBytes += chunk.byteLength;
        onProgress?.({ step: 'fetching', doneBytes, totalBytes: ref.sizeBytes });
        controller.enqueue(chunk);
      },
    }),
  );
}

function asNetworkError(ref: RecordingRef, thrown: unknown, signal?: AbortSignal): RunError {
  if (thrown instanceof RunError) return thrown;
  if (signal?.aborted) return new RunError('cancelled', `Fetching ${ref.name} was stopped.`);
  return new RunError(
    'network',
    `The connection broke while fetching ${ref.name}. Check the network and try again.`,
    { cause: thrown },
  );
}

/** Absent on plain HTTP other than localhost; recordings are then fetched each time. */
async function openCache(): Promise<Cache | null> {
  if (typeof caches === 'undefined') return null;
  return caches.open(cacheName).catch(() => null);
}

const keyOf = (ref: RecordingRef): string => `/recordings-by-hash/${ref.sha256}`;

async function readKept(ref: RecordingRef): Promise<Blob | null> {
  const cache = await openCache();
  const response = await cache?.match(keyOf(ref));
  return response ? response.blob() : null;
}

async function evict(ref: RecordingRef): Promise<void> {
  const cache = await openCache();
  await cache?.delete(keyOf(ref));
}
