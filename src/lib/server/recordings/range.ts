/** What part of `size` bytes a Range header asks for; both ends included. */
export type RangeAnswer = { start: number; end: number } | 'whole' | 'unsatisfiable';

/**
 * Reads a Range header as RFC 9110 section 14 says: one range is honoured; several, another unit
 * or a malformed header may be ignored, and are, by answering the whole.
 */
export function readRange(header: string | null, size: number): RangeAnswer {
  const match = header ? /^bytes=(\d*)-(\d*)$/.exec(header.trim()) : null;
  if (!match) return 'whole';
  const [, first, last] = match;
  if (!first && !last) return 'whole';
  if (!first) {
    const suffix = Number(last);
    if (suffix === 0) return 'unsatisfiable';
    return { start: Math.max(0, size - suffix), end: size - 1 };
  }
  const start = Number(first);
  if (last && Number(last) < start) return 'whole';
  if (start >= size) return 'unsatisfiable';
  return { start, end: last ? Math.min(Number(last), size - 1) : size - 1 };
}
