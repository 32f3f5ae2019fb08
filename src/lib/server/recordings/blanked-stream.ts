import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { type Readable, Transform } from 'node:stream';

/**
 * The file's bytes as they are to be stored: its first bytes replaced by `head` where
 * identification is not kept. `contentSha256` gives, once all has been read, the hash of the file
 * with the identification blanked, whichever of the two was stored.
 */
export function storedBytes(
  path: string,
  blankedHead: Uint8Array,
  keepIdentification: boolean,
): { bytes: Readable; contentSha256: () => string } {
  const content = createHash('sha256').update(blankedHead);
  let position = 0;
  const pass = new Transform({
    transform(chunk: Buffer, _encoding, done) {
      const inHead = Math.max(0, Math.min(chunk.length, blankedHead.length - position));
      content.update(chunk.subarray(inHead));
      if (inHead > 0 && !keepIdentification) {
        chunk.set(blankedHead.subarray(position, position + inHead));
      }
      position += chunk.length;
      done(null, chunk);
    },
  });
  const file = createReadStream(path, { highWaterMark: 1024 * 1024 });
  file.on('error', (reason) => pass.destroy(reason));
  pass.on('close', () => file.destroy());
  return { bytes: file.pipe(pass), contentSha256: () => content.digest('hex') };
}
