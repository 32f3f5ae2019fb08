/** Neighbouring items `from .. to - 1` of a list. */
export interface Range {
  from: number;
  to: number;
}

/** Cuts a range into ranges of at most `size`, in order, covering it without overlap. */
export function splitRange({ from, to }: Range, size: number): Range[] {
  const step = Math.max(1, Math.floor(size));
  const parts: Range[] = [];
  for (let start = from; start < to; start += step) {
    parts.push({ from: start, to: Math.min(to, start + step) });
  }
  return parts;
}

/** What of 0 .. count - 1 is not covered by `done`. */
export function rangesLeft(count: number, done: Range[]): Range[] {
  const left: Range[] = [];
  let next = 0;
  for (const { from, to } of [...done].sort((a, b) => a.from - b.from)) {
    if (from > next) left.push({ from: next, to: from });
    next = Math.max(next, to);
  }
  if (next < count) left.push({ from: next, to: count });
  return left;
}

/** Enough parts that the workers end at about the same time, and no more than that. */
export function partSize(count: number, workers: number, partsPerWorker: number, most: number) {
  return Math.max(1, Math.min(most, Math.ceil(count / (workers * partsPerWorker))));
}
