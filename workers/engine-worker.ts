import * as Comlink from 'comlink';
import { bytesOfBlob } from './engine';
import { engineApi } from './engine-api';
import type { RecordingInput } from './protocol';

/** Entry of a browser's worker: the engine over Comlink, recordings as Blobs. */
Comlink.expose(engineApi(({ blob }: RecordingInput) => bytesOfBlob(blob)));
