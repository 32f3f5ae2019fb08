import { createHash } from 'node:crypto';
import { Readable } from 'node:stream';
import { error } from '@sveltejs/kit';
import { bytesPerElement, npyHeader, npyHeaderLimit, parseNpyHeader } from '$workers/engine/npy';
import type { Db } from '../database';
import type { Storage } from '../storage';
import { ResultRefused } from './refused';

export interface KeptMap {
  name: string;
  storageKey: string;
  sha256: string;
  sizeBytes: number;
  dtype: string;
  shape: number[];
}

/**
 * Puts an NPY file under the key of its hash, where equal maps of another run may lie already.
 * Bytes that do not have this hash (a map replaced since it was checked) are refused, and never
 * lie under the key.
 */
export async function keepByHash(
  storage: Storage,
  sha256: string,
  open: () => Readable,
): Promise<Pick<KeptMap, 'storageKey' | 'sha256' | 'sizeBytes'>> {
  const storageKey = `maps/${sha256.slice(0, 2)}/${sha256}.npy`;
  const kept = (await storage.exists(storageKey))
    ? { sizeBytes: await storage.size(storageKey) }
    : await storage.put(storageKey, Readable.from(ofHash(sha256, open())));
  return { storageKey, sha256, sizeBytes: kept.sizeBytes };
}

async function* ofHash(sha256: string, bytes: Readable): AsyncGenerator<Uint8Array> {
  const hash = createHash('sha256');
  for await (const part of bytes as AsyncIterable<Uint8Array>) {
    hash.update(part);
    yield part;
  }
  if (hash.digest('hex') !== sha256) {
    throw new ResultRefused('map-changed', 'A map was sent anew while the result was checked.');
  }
}

async function findMap(db: Db, teamId: string, runId: string, name: string): Promise<KeptMap> {
  const map = await db
    .selectFrom('storedMap')
    .select(['name', 'storageKey', 'sha256', 'sizeBytes', 'dtype', 'shape'])
    .where('teamId', '=', teamId)
    .where('runId', '=', runId)
    .where('name', '=', name)
    .executeTakeFirst();
  if (!map) error(404, { code: 'not-found', message: `This run keeps no map called ${name}.` });
  return map;
}

export interface MapBytes {
  map: KeptMap;
  sizeBytes: number;
  bytes: Readable;
}

/** A whole map as the NPY file that it is. */
export async function openMap(
  db: Db,
  storage: Storage,
  teamId: string,
  runId: string,
  name: string,
): Promise<MapBytes> {
  const map = await findMap(db, teamId, runId, name);
  return { map, sizeBytes: map.sizeBytes, bytes: storage.stream(map.storageKey) };
}

/** Entries `indices` along the first axis (pairs, or sites of the phases) as an NPY of its own. */
export async function openSlices(
  db: Db,
  storage: Storage,
  teamId: string,
  runId: string,
  name: string,
  indices: number[],
): Promise<MapBytes> {
  const map = await findMap(db, teamId, runId, name);
  const head = await storage.read(map.storageKey, 0, Math.min(map.sizeBytes, npyHeaderLimit));
  const { dtype, shape, dataOffset } = parseNpyHeader(head);
  const [count = 0, ...rest] = shape;
  const outside = indices.find((index) => index >= count);
  if (outside !== undefined) {
    error(400, {
      code: 'index-outside',
      message: `Map ${name} has entries 0 to ${count - 1}; ${outside} is outside.`,
    });
  }
  const length = rest.reduce((product, n) => product * n, bytesPerElement(dtype));
  const parts = [npyHeader(dtype, indices.length === 1 ? rest : [indices.length, ...rest])];
  for (const index of indices) {
    const part = await storage.read(map.storageKey, dataOffset + index * length, length);
    parts.push(new Uint8Array(part));
  }
  const sizeBytes = parts.reduce((sum, part) => sum + part.length, 0);
  return { map, sizeBytes, bytes: Readable.from(parts, { objectMode: false }) };
}
