import { open } from 'node:fs/promises';
import type { ByteSource } from './engine';

/** A file as the reader's byte source; close it when done. */
export async function openFileSource(
  path: string,
): Promise<{ source: ByteSource; close: () => Promise<void> }> {
  const file = await open(path, 'r');
  const { size } = await file.stat();
  const source: ByteSource = {
    size,
    async read(offset, length) {
      if (offset < 0 || length < 0 || offset + length > size) {
        throw new RangeError(`bytes ${offset} to ${offset + length} leave a file of ${size}`);
      }
      const bytes = new Uint8Array(length);
      let filled = 0;
      while (filled < length) {
        const { bytesRead } = await file.read(bytes, filled, length - filled, offset + filled);
        if (bytesRead === 0) throw new Error('the file became shorter while it was read');
        filled += bytesRead;
      }
      return bytes;
    },
  };
  return { source, close: () => file.close() };
}
