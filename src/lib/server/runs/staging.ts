import { Readable, Transform } from 'node:stream';
import type { Axes } from '$engine';
import { npyElements, npyHeaderLimit, parseNpyHeader } from '$lib/model/npy';
import type { NpyArray, NpyHeader } from '$lib/model/npy';
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
  const guard = new NpyGuard(name, check);
  bytes.on('error', (reason) => guard.destroy(reason));
  await storage.put(stagedKey(runId, name), bytes.pipe(guard));
}

/** Passes bytes on while they are those of an NPY file whose header holds. */
class NpyGuard extends Transform {
  readonly #name: string;
  readonly #check: (header: NpyHeader) => void;
  #head: Buffer | null = Buffer.alloc(0);
  #due = Infinity;
  #passed = 0;

  constructor(name: string, check: (header: NpyHeader) => void) {
    super();
    this.#name = name;
    this.#check = check;
  }

  override _transform(chunk: Buffer, _encoding: string, done: (reason?: Error | null) => void) {
    try {
      if (this.#head) {
        this.#head = Buffer.concat([this.#head, chunk]);
        if (this.#head.length >= npyHeaderLimit) this.#readHead();
      } else {
        this.#pass(chunk);
      }
      done();
    } catch (reason) {
      done(reason as Error);
    }
  }

  override _flush(done: (reason?: Error | null) => void) {
    try {
      if (this.#head) this.#readHead();
      if (this.#passed < this.#due)
        this.#refuse(`ends after ${this.#passed} of ${this.#due} bytes`);
      done();
    } catch (reason) {
      done(reason as Error);
    }
  }

  #readHead(): void {
    const head = this.#head as Buffer;
    this.#head = null;
    const header = headerOf(this.#name, head);
    this.#check(header);
    this.#due = header.dataOffset + header.dataLength;
    this.#pass(head);
  }

  #pass(chunk: Buffer): void {
    this.#passed += chunk.length;
    if (this.#passed > this.#due) this.#refuse(`is longer than the ${this.#due} bytes due`);
    this.push(chunk);
  }

  #refuse(what: string): never {
    throw new ResultRefused('map-shape', `Map ${this.#name} ${what}.`);
  }
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
  header: NpyHeader;
  data: NpyArray;
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
  const header = headerOf(name, await storage.read(key, 0, Math.min(size, npyHeaderLimit)));
  check(header);
  const elements = await storage.read(key, header.dataOffset, header.dataLength);
  return { header, data: npyElements(header, elements) };
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
