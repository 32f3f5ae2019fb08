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
