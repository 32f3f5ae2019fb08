import type { ByteSource } from '../engine/read';

/**
 * A file behind an address that honours Range requests. Each read is one request.
 * @throws Error for people, when the server cannot be reached or does not answer with the range.
 */
export function bytesOfUrl(url: string, size: number): ByteSource {
  return {
    size,
    async read(offset, length) {
      if (offset < 0 || length < 0 || offset + length > size) {
        throw new RangeError(`bytes ${offset} to ${offset + length} leave a file of ${size}`);
      }
      if (length === 0) return new Uint8Array(0);
      const headers = { Range: `bytes=${offset}-${offset + length - 1}` };
      const response = await fetch(url, { headers }).catch(() => {
        throw new Error('The server could not be reached.');
      });
      const isWhole = response.status === 200 && offset === 0 && length === size;
      if (response.status !== 206 && !isWhole) {
        throw new Error(
          `The server answered ${response.status} to a request for part of the file.`,
        );
      }
      const bytes = new Uint8Array(await response.arrayBuffer());
      if (bytes.length !== length) {
        throw new Error(`The server sent ${bytes.length} bytes where ${length} were asked for.`);
      }
      return bytes;
    },
  };
}
