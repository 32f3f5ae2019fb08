import { workerData } from 'node:worker_threads';
import * as Comlink from 'comlink';
import { bytesOfBlob, type ByteSource } from './engine';
import { engineApi } from './engine-api';
import { openFileSource } from './file-source';
import type { ThreadRecording } from './protocol';

/**
 * Entry of a thread under Node, which run/thread-pool.ts starts: the engine over Comlink, recordings
 * as Blobs or files.
 */
const { port } = workerData as { port: Comlink.Endpoint };

/** Each file is opened once; the thread's end closes it. */
const opened = new Map<string, Promise<ByteSource>>();

function fileAt(path: string): Promise<ByteSource> {
  const found = opened.get(path) ?? openFileSource(path).then(({ source }) => source);
  opened.set(path, found);
  return found;
}

Comlink.expose(
  engineApi((recording: ThreadRecording) =>
    'blob' in recording ? bytesOfBlob(recording.blob) : fileAt(recording.path),
  ),
  port,
);
