import { readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';

export type Settings = Record<string, number | number[]>;

/** One hot path: its data, our way to do it, and what a NumPy or SciPy twin in twins/ is held to. */
export interface Task {
  /** Letter of the table in kernels.md. */
  id: string;
  twin: string;
  name: string;
  /** What is counted, and how many of them one repeat makes. */
  unit: string;
  amount: number;
  repeats: number;
  /** Least and wished-for ratio, ours to the twin's. */
  mustReach: number;
  ambitious: number;
  /** Writes seeded inputs and settings.json into a folder. */
  prepare(folder: string): void;
  /** Reads them and returns the work to be timed; its result is compared with the twin's. */
  load(folder: string): () => ArrayLike<number>;
  /** Throws where two results differ by more than rounding. */
  compare(ours: Float64Array, twin: Float64Array): void;
}

export function write(folder: string, name: string, array: ArrayBufferView): void {
  writeFileSync(
    path.join(folder, name),
    Buffer.from(array.buffer, array.byteOffset, array.byteLength),
  );
}

export function writeSettings(folder: string, settings: Settings): void {
  writeFileSync(path.join(folder, 'settings.json'), JSON.stringify(settings));
}

function bytesOf(folder: string, name: string): ArrayBuffer {
  const bytes = readFileSync(path.join(folder, name));
  return new Uint8Array(bytes).buffer;
}

export const readF32 = (folder: string, name: string) => new Float32Array(bytesOf(folder, name));
export const readF64 = (folder: string, name: string) => new Float64Array(bytesOf(folder, name));
export const readU16 = (folder: string, name: string) => new Uint16Array(bytesOf(folder, name));

/** Seeded numbers in 0 .. 1; quick, and good enough for data. */
export function uniform(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
}

/** A random order of 0 .. count - 1. */
export function order(count: number, random: () => number): Uint16Array {
  const items = Uint16Array.from({ length: count }, (_, i) => i);
  for (let i = count - 1; i > 0; i--) {
    const other = Math.floor(random() * (i + 1));
    [items[i], items[other]] = [items[other], items[i]];
  }
  return items;
}

/** Throws unless all numbers agree within `tolerance`. */
export function agree(
  ours: ArrayLike<number>,
  twin: ArrayLike<number>,
  tolerance: number,
  what: string,
): void {
  if (ours.length !== twin.length) {
    throw new Error(`${what}: ${ours.length} numbers of ours, ${twin.length} of the twin`);
  }
  for (let i = 0; i < ours.length; i++) {
    if (!(Math.abs(ours[i] - twin[i]) <= tolerance)) {
      throw new Error(`${what} ${i}: ours ${ours[i]}, twin ${twin[i]}, tolerance ${tolerance}`);
    }
  }
}
