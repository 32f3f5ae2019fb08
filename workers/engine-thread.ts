import { parentPort } from 'node:worker_threads';
import * as Comlink from 'comlink';
import nodeEndpoint from 'comlink/dist/esm/node-adapter';
import { bytesOfBlob, type ByteSource } from './engine';
import { engineApi } from './engine-api';
import { openFileSource } from './file-source';
import type { ThreadRecording } from './protocol';

/** Entry of a thread under Node: the engine over Comlink, recordings as Blobs or files. */
if (!parentPort) throw new Error('engine-thread is started by the pool of a run, as a thread.');

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
  nodeEndpoint(parentPort),
);
