import { createHash } from 'node:crypto';
import { Readable } from 'node:stream';
import type { Axes } from '$engine';
import { npyElements, npyHeaderLimit, parseNpyHeader } from '$workers/engine/npy';
import type { NpyArray, NpyHeader } from '$workers/engine/npy';
import { mapShape, sentMaps, type SentMapName } from '$lib/model/run-maps';
import type { Storage } from '../storage';
import { ResultRefused } from './refused';

/**
 * Maps arrive one by one before the result that they belong to. They wait under the run's own
 * key, replaced freely, until the result is found right; then they move to the key of their hash.
 */
const stagedKey = (runId: string, name: string): string => `staging/${runId}/${name}.npy`;

/** Dtype and shape by the plan's axes. The phases' epochs may number up to the planned ones. */
export function checkHeader(
  name: SentMapName,
  header: NpyHeader,
  axes: Axes,
  epochs: { atMost: number } | { exactly: number },
): void {
  const { dtype } = sentMaps[name];
  if (header.dtype !== dtype) {
    throw new ResultRefused('map-shape', `Map ${name} has dtype ${header.dtype}, due is ${dtype}.`);
  }
  const stated = header.shape[1] ?? 0;
  const epochCount = 'exactly' in epochs ? epochs.exactly : Math.min(stated, epochs.atMost);
  const due = mapShape(name, axes, epochCount);
  if (due.length !== header.shape.length || due.some((n, i) => n !== header.shape[i])) {
    throw new ResultRefused(
      'map-shape',
      `Map ${name} has shape ${header.shape.join(' x ')}, due is ${due.join(' x ')}.`,
    );
  }
}

/** Streams one map into its waiting place; refuses at its header, or when its length is wrong. */
export async function stageMap(
  storage: Storage,
  runId: string,
  name: SentMapName,
  bytes: Readable,
  check: (header: NpyHeader) => void,
): Promise<void> {
  // A request that breaks off before it is read is reported by reading it.
  bytes.on('error', () => undefined);
  await storage.put(stagedKey(runId, name), Readable.from(guarded(name, bytes, check)));
}

/**
 * Passes bytes on while they are those of an NPY file whose header holds. Pulled, not pushed: a
 * refusal meets the reader, and is never an error of a stream that nobody listens to yet.
 */
async function* guarded(
  name: string,
  bytes: Readable,
  check: (header: NpyHeader) => void,
): AsyncGenerator<Buffer> {
  const refuse = (what: string) => new ResultRefused('map-shape', `Map ${name} ${what}.`);
  let head: Buffer = Buffer.alloc(0);
  let due: number | null = null;
  let passed = 0;
  const dueOf = (start: Buffer): number => {
    const header = headerOf(name, start);
    check(header);
    return header.dataOffset + header.dataLength;
  };
  for await (const part of bytes as AsyncIterable<Buffer>) {
    head = due === null ? Buffer.concat([head, part]) : part;
    if (due === null && head.length < npyHeaderLimit) continue;
    due ??= dueOf(head);
    passed += head.length;
    if (passed > due) throw refuse(`is longer than the ${due} bytes due`);
    yield head;
  }
  if (due === null) {
    due = dueOf(head);
    passed = head.length;
    if (passed > due) throw refuse(`is longer than the ${due} bytes due`);
    yield head;
  }
  if (passed < due) throw refuse(`ends after ${passed} of ${due} bytes`);
}

function headerOf(name: string, bytes: Uint8Array): NpyHeader {
  try {
    return parseNpyHeader(bytes);
  } catch (reason) {
    if (!(reason instanceof RangeError)) throw reason;
    throw new ResultRefused('map-shape', `Map ${name} ${reason.message}.`);
  }
}

export interface StagedMap {
  data: NpyArray;
  /** Of the whole file: what is kept later must be what was read here. */
  sha256: string;
}

/** Reads a waiting map whole. Its header was checked on arrival and is checked again. */
export async function readStaged(
  storage: Storage,
  runId: string,
  name: SentMapName,
  check: (header: NpyHeader) => void,
): Promise<StagedMap> {
  const key = stagedKey(runId, name);
  if (!(await storage.exists(key))) {
    throw new ResultRefused('map-missing', `Map ${name} has not arrived.`);
  }
  const size = await storage.size(key);
  const start = await storage.read(key, 0, Math.min(size, npyHeaderLimit));
  const header = headerOf(name, start);
  check(header);
  const elements = await storage.read(key, header.dataOffset, header.dataLength);
  const hash = createHash('sha256').update(start.subarray(0, header.dataOffset)).update(elements);
  return { data: npyElements(header, elements), sha256: hash.digest('hex') };
}

export const openStaged = (storage: Storage, runId: string, name: SentMapName): Readable =>
  storage.stream(stagedKey(runId, name));

export async function removeStaged(
  storage: Storage,
  runId: string,
  names: SentMapName[],
): Promise<void> {
  for (const name of names) await storage.remove(stagedKey(runId, name));
}
