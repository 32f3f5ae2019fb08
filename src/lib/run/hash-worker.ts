/// <reference lib="webworker" />
import { SHA256 } from '@oslojs/crypto/sha2';

/**
 * Hashes one Blob off the page's thread and answers with its SHA-256 in hexadecimal. WebCrypto
 * wants the whole file in memory, so larger files go chunk by chunk through a library.
 */
const wholeFileLimitBytes = 256 * 1024 ** 2;
const chunkBytes = 4 * 1024 ** 2;

export interface HashReply {
  hashedBytes: number;
  /** Present in the last reply only. */
  sha256?: string;
  failure?: string;
}

const toHex = (bytes: Uint8Array): string =>
  Array.from(bytes, (byte) => byte.toString(16).padStart(2, '0')).join('');

async function hashWhole(blob: Blob): Promise<Uint8Array> {
  return new Uint8Array(await crypto.subtle.digest('SHA-256', await blob.arrayBuffer()));
}

async function hashInChunks(blob: Blob, onChunk: (bytes: number) => void): Promise<Uint8Array> {
  const hash = new SHA256();
  for (let start = 0; start < blob.size; start += chunkBytes) {
    const chunk = blob.slice(start, start + chunkBytes);
    hash.update(new Uint8Array(await chunk.arrayBuffer()));
    onChunk(Math.min(blob.size, start + chunkBytes));
  }
  return hash.digest();
}

self.onmessage = async ({ data: blob }: MessageEvent<Blob>): Promise<void> => {
  const reply = (message: HashReply): void => self.postMessage(message);
  try {
    // crypto.subtle is absent on plain HTTP other than localhost.
    const whole = blob.size <= wholeFileLimitBytes && 'subtle' in crypto;
    const digest = whole
      ? await hashWhole(blob)
      : await hashInChunks(blob, (hashedBytes) => reply({ hashedBytes }));
    reply({ hashedBytes: blob.size, sha256: toHex(digest) });
  } catch (thrown) {
    const failure = thrown instanceof Error ? thrown.message : String(thrown);
    reply({ hashedBytes: 0, failure });
  }
};
