import { join } from 'node:path';
import type { Readable } from 'node:stream';
import { config } from '../config';
import { fileStorage, removeHalfWritten } from './file-storage';

/**
 * Where large bytes live (recordings, maps). Keys are paths like `recordings/ab/abcdef...`;
 * the file system below DATA_DIR stands behind it.
 */
export interface Storage {
  /** Streams to a temporary place, then moves it there whole: a key is complete or absent. */
  put(key: string, bytes: Readable | Uint8Array): Promise<{ sizeBytes: number; sha256: string }>;
  /** `length` bytes from `offset`. */
  read(key: string, offset: number, length: number): Promise<Uint8Array>;
  /** Bytes `start` to `end`, both included, as a stream; the whole by default. */
  stream(key: string, range?: { start: number; end: number }): Readable;
  size(key: string): Promise<number>;
  exists(key: string): Promise<boolean>;
  remove(key: string): Promise<void>;
}

const root = join(config.dataDir, 'storage');

/** The application's storage. Scripts outside the server make their own with `fileStorage`. */
export const storage: Storage = fileStorage(root);

export const cleanStorage = (): Promise<void> => removeHalfWritten(root);
