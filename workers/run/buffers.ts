import type { PairBlock } from '../engine';

/** The memory of a block's arrays, to be moved instead of copied. */
export function buffersOf(block: PairBlock): ArrayBuffer[] {
  const buffers = Object.values(block).flatMap((value) =>
    ArrayBuffer.isView(value) && value.buffer instanceof ArrayBuffer ? [value.buffer] : [],
  );
  return [...new Set(buffers)];
}
