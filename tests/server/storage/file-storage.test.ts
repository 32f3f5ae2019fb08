import { createHash } from 'node:crypto';
import { mkdir, mkdtemp, readdir, rm, utimes, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import { buffer } from 'node:stream/consumers';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { fileStorage, removeHalfWritten } from '$lib/server/storage/file-storage';

let root: string;
beforeAll(async () => {
  root = await mkdtemp(join(tmpdir(), 'nullwright-storage-'));
});
afterAll(() => rm(root, { recursive: true }));

describe('the file storage', () => {
  it('gives back what was put, with its size and SHA-256', async () => {
    const storage = fileStorage(root);
    const bytes = Buffer.from('abc');
    // SHA-256 of "abc": FIPS 180-2, appendix B.1.
    const known = 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad';
    expect(await storage.put('maps/ab/abc', bytes)).toEqual({ sizeBytes: 3, sha256: known });
    expect(await buffer(storage.stream('maps/ab/abc'))).toEqual(bytes);
    expect(await storage.size('maps/ab/abc')).toBe(3);
    expect(await storage.exists('maps/ab/abc')).toBe(true);
  });

  it('takes a stream and answers ranges of it', async () => {
    const storage = fileStorage(root);
    const chunks = Array.from({ length: 300 }, (_, i) => Buffer.alloc(1000, i % 251));
    const whole = Buffer.concat(chunks);
    const put = await storage.put('recordings/00/one', Readable.from(chunks));
    expect(put.sha256).toBe(createHash('sha256').update(whole).digest('hex'));
    const part = await storage.read('recordings/00/one', 1999, 4002);
    expect(Buffer.from(part)).toEqual(whole.subarray(1999, 6001));
    const ranged = storage.stream('recordings/00/one', { start: 998, end: 1001 });
    expect(await buffer(ranged)).toEqual(whole.subarray(998, 1002));
  });

  it('refuses a range that leaves the file, naming it', async () => {
    const storage = fileStorage(root);
    await storage.put('maps/short', Buffer.alloc(10));
    await expect(storage.read('maps/short', 8, 3)).rejects.toThrow(
      'bytes 8 to 11 leave "maps/short" of 10 bytes',
    );
  });

  it('leaves nothing behind when a stream breaks off', async () => {
    const storage = fileStorage(root);
    async function* broken() {
      yield Buffer.alloc(1000);
      throw new Error('connection lost');
    }
    await expect(storage.put('maps/broken', Readable.from(broken()))).rejects.toThrow(
      'connection lost',
    );
    expect(await storage.exists('maps/broken')).toBe(false);
    expect(await readdir(join(root, '.incoming'))).toEqual([]);
  });

  it('clears what a killed server left half-written a day ago, and nothing younger', async () => {
    const incoming = join(root, '.incoming');
    await mkdir(incoming, { recursive: true });
    for (const name of ['old', 'young']) await writeFile(join(incoming, name), 'half');
    const twoDaysAgo = new Date(Date.now() - 48 * 60 * 60 * 1000);
    await utimes(join(incoming, 'old'), twoDaysAgo, twoDaysAgo);
    await removeHalfWritten(root);
    expect(await readdir(incoming)).toEqual(['young']);
    await rm(join(incoming, 'young'));
  });

  it('removes a key, also one that is not there', async () => {
    const storage = fileStorage(root);
    await storage.put('maps/gone', Buffer.alloc(1));
    await storage.remove('maps/gone');
    await storage.remove('maps/gone');
    expect(await storage.exists('maps/gone')).toBe(false);
  });

  it.each(['../outside', '/etc/passwd', 'maps/../../x', 'maps//x', '', 'maps/.hidden', 'a\\b'])(
    'refuses the key "%s", which could leave its folder',
    async (key) => {
      const storage = fileStorage(root);
      await expect(storage.put(key, Buffer.alloc(1))).rejects.toThrow('is no key');
      expect(() => storage.stream(key)).toThrow('is no key');
    },
  );
});
