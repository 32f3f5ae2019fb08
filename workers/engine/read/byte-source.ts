/** Random access to a file's bytes, wherever they are: a Blob, a file handle, a buffer. */
export interface ByteSource {
  readonly size: number;
  /** Exactly `length` bytes from `offset`; rejects when the range leaves the file. */
  read(offset: number, length: number): Promise<Uint8Array>;
}

export function bytesOf(buffer: Uint8Array): ByteSource {
  return {
    size: buffer.length,
    read(offset, length) {
      if (offset < 0 || length < 0 || offset + length > buffer.length) {
        return Promise.reject(
          new RangeError(
            `bytes ${offset} to ${offset + length} leave a source of ${buffer.length}`,
          ),
        );
      }
      return Promise.resolve(buffer.subarray(offset, offset + length));
    },
  };
}

export function bytesOfBlob(blob: Blob): ByteSource {
  return {
    size: blob.size,
    async read(offset, length) {
      if (offset < 0 || length < 0 || offset + length > blob.size) {
        throw new RangeError(`bytes ${offset} to ${offset + length} leave a file of ${blob.size}`);
      }
      return new Uint8Array(await blob.slice(offset, offset + length).arrayBuffer());
    },
  };
}
