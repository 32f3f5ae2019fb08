import { createHash, randomUUID } from 'node:crypto';
import { createReadStream, createWriteStream } from 'node:fs';
import { mkdir, open, readdir, rename, rm, stat } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { Readable, Transform } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import type { Storage } from './index';

const keyPattern = /^[a-z0-9]+(?:[._-][a-z0-9]+)*(?:\/[a-z0-9]+(?:[._-][a-z0-9]+)*)*$/;

/**
 * Keeps every key as a file below `root`. Writes go to `root/.incoming` first and are moved into
 * place when they are whole and on the disk, so that a crash leaves no half file under a key.
 */
export function fileStorage(root: string): Storage {
  const incoming = join(root, '.incoming');

  function pathOf(key: string): string {
    if (!keyPattern.test(key)) {
      throw new RangeError(`storage: "${key}" is no key; use lower-case words joined by /`);
    }
    return join(root, key);
  }

  async function put(key: string, bytes: Readable | Uint8Array) {
    const path = pathOf(key);
    const temporary = join(incoming, randomUUID());
    await mkdir(incoming, { recursive: true });
    try {
      const written = await writeHashed(temporary, bytes);
      await mkdir(dirname(path), { recursive: true });
      await rename(temporary, path);
      return written;
    } catch (reason) {
      await rm(temporary, { force: true });
      throw reason;
    }
  }

  async function read(key: string, offset: number, length: number): Promise<Uint8Array> {
    const file = await open(pathOf(key), 'r');
    try {
      const { size } = await file.stat();
      if (offset < 0 || length < 0 || offset + length > size) {
        throw new RangeError(
          `storage: bytes ${offset} to ${offset + length} leave "${key}" of ${size} bytes`,
        );
      }
      const bytes = new Uint8Array(length);
      let filled = 0;
      while (filled < length) {
        const { bytesRead } = await file.read(bytes, filled, length - filled, offset + filled);
        if (bytesRead === 0) throw new Error(`storage: "${key}" became shorter while it was read`);
        filled += bytesRead;
      }
      return bytes;
    } finally {
      await file.close();
    }
  }

  return {
    put,
    read,
    stream: (key, range) => createReadStream(pathOf(key), range),
    size: async (key) => (await stat(pathOf(key))).size,
    exists: (key) =>
      stat(pathOf(key)).then(
        () => true,
        (reason: NodeJS.ErrnoException) => {
          if (reason.code === 'ENOENT') return false;
          throw reason;
        },
      ),
    remove: (key) => rm(pathOf(key), { force: true }),
  };
}

/** Removes what a server that was killed in the middle of a write left behind over a day ago. */
export async function removeHalfWritten(root: string, now = Date.now()): Promise<void> {
  const folder = join(root, '.incoming');
  const names = await readdir(folder).catch(() => []);
  for (const name of names) {
    const { mtimeMs } = await stat(join(folder, name));
    if (now - mtimeMs > 24 * 60 * 60 * 1000) await rm(join(folder, name), { force: true });
  }
}

async function writeHashed(path: string, bytes: Readable | Uint8Array) {
  const hash = createHash('sha256');
  let sizeBytes = 0;
  const measure = new Transform({
    transform(chunk: Buffer, _encoding, done) {
      hash.update(chunk);
      sizeBytes += chunk.length;
      done(null, chunk);
    },
  });
  const source = bytes instanceof Uint8Array ? Readable.from([bytes]) : bytes;
  // flush: on the disk before the move, so that a key survives a power cut whole.
  await pipeline(source, measure, createWriteStream(path, { flags: 'wx', flush: true }));
  return { sizeBytes, sha256: hash.digest('hex') };
}
