/** A time-stamped annotations list of EDF+ (Kemp and Olivan 2003, 2.2.2). */
export interface AnnotationList {
  onsetS: number;
  durationS: number | null;
  /** Without the empty ones, which only carry a record's time. */
  texts: string[];
}

/** More annotations than this are refused: they would cost memory far beyond the file's size. */
export const mostAnnotations = 500_000;

const TEXT_END = 0x14;
const DURATION_MARK = 0x15;
const ONSET = /^[+-]\d+(\.\d*)?$/;
const DURATION = /^\d+(\.\d*)?$/;

const strict = new TextDecoder('utf-8', { fatal: true });
const latin1 = new TextDecoder('latin1');

/** UTF-8 as the standard asks; other bytes are taken as Latin-1 rather than lost. */
function decodeText(bytes: Uint8Array): string {
  try {
    return strict.decode(bytes);
  } catch {
    return latin1.decode(bytes);
  }
}

/**
 * Reads one list, `bytes[start..end)` without the closing zero byte; null when it is malformed.
 * The form: onset [21 duration] 20 text 20 text 20 ...
 */
function readList(bytes: Uint8Array, start: number, end: number): AnnotationList | null {
  let stampEnd = start;
  while (stampEnd < end && bytes[stampEnd] !== TEXT_END) stampEnd++;
  // The longest stamp that makes sense is far shorter; a longer one is noise.
  if (stampEnd === end || stampEnd - start > 64) return null;
  const stamp = latin1.decode(bytes.subarray(start, stampEnd));
  const [onset, duration, ...rest] = stamp.split(String.fromCharCode(DURATION_MARK));
  if (!ONSET.test(onset) || rest.length > 0) return null;
  if (duration !== undefined && !DURATION.test(duration)) return null;
  const texts: string[] = [];
  for (let from = stampEnd + 1; from < end && texts.length <= mostAnnotations;) {
    let to = from;
    while (to < end && bytes[to] !== TEXT_END) to++;
    const text = to > from ? decodeText(bytes.subarray(from, to)).trim() : '';
    if (text !== '') texts.push(text);
    from = to + 1;
  }
  return {
    onsetS: Number(onset),
    durationS: duration === undefined ? null : Number(duration),
    texts,
  };
}

/**
 * Visits the lists of one record's block of an annotations signal; `visit` gets null, with the
 * place, for a stretch of bytes that is no list, and ends the walk by returning false.
 */
export function walkAnnotations(
  block: Uint8Array,
  visit: (list: AnnotationList | null, at: number) => boolean,
): void {
  let start = 0;
  while (start < block.length) {
    if (block[start] === 0) {
      start++;
      continue;
    }
    let end = block.indexOf(0, start);
    if (end < 0) end = block.length;
    if (!visit(readList(block, start, end), start)) return;
    start = end + 1;
  }
}

/** When the record starts, by the first list of its first annotations block; null if unsaid. */
export function recordOnset(block: Uint8Array): number | null {
  let onsetS: number | null = null;
  walkAnnotations(block, (list) => {
    onsetS = list?.onsetS ?? null;
    return false;
  });
  return onsetS;
}
