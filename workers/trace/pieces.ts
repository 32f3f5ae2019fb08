/** A stretch of neighbouring records within one segment. */
export interface Piece {
  segment: number;
  /** Of the file's records. */
  firstRecord: number;
  recordCount: number;
  /** Seconds from the header's start. */
  startS: number;
  durationS: number;
}

interface Stretch {
  startS: number;
  firstRecord: number;
  recordCount: number;
}

/** Cuts the segments into pieces of at most `mostRecords`, in order of time. */
export function cutPieces(
  segments: Stretch[],
  recordDurationS: number,
  mostRecords: number,
): Piece[] {
  const pieces: Piece[] = [];
  segments.forEach((segment, index) => {
    for (let done = 0; done < segment.recordCount; done += mostRecords) {
      const recordCount = Math.min(mostRecords, segment.recordCount - done);
      pieces.push({
        segment: index,
        firstRecord: segment.firstRecord + done,
        recordCount,
        startS: segment.startS + done * recordDurationS,
        durationS: recordCount * recordDurationS,
      });
    }
  });
  return pieces;
}

/** Indices [from, to) of the pieces that touch a window; pieces are in order of time. */
export function piecesIn(pieces: Piece[], startS: number, endS: number): [number, number] {
  const from = firstIndex(pieces, (piece) => piece.startS + piece.durationS > startS);
  const to = firstIndex(pieces, (piece) => piece.startS >= endS);
  return [from, Math.max(from, to)];
}

/** The first index at which a condition, false before and true after, holds. */
function firstIndex(pieces: Piece[], holds: (piece: Piece) => boolean): number {
  let low = 0;
  let high = pieces.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (holds(pieces[middle])) high = middle;
    else low = middle + 1;
  }
  return low;
}
