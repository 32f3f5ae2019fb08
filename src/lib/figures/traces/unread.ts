import { piecesIn } from '$workers/trace/pieces';
import type { Columns } from './extents';
import type { TraceData } from './trace-data';

/** Stretches of the window that were recorded, but not read yet: [from, to] in seconds. */
export function unreadIn(
  data: TraceData,
  columns: Columns,
  needsSamples: boolean,
): [number, number][] {
  const endS = columns.startS + columns.count * columns.secondsPerColumn;
  const stretches: [number, number][] = [];
  const [from, to] = piecesIn(data.file.pieces, columns.startS, endS);
  for (let piece = from; piece < to; piece++) {
    if (data.pyramids[piece]) continue;
    const { startS, durationS } = data.file.pieces[piece];
    if (!needsSamples) {
      add(stretches, startS, startS + durationS);
      continue;
    }
    const [firstTile, endTile] = piecesIn(data.file.tiles, startS, startS + durationS - 1e-9);
    for (let tile = firstTile; tile < endTile; tile++) {
      const own = data.file.tiles[tile];
      if (!data.tile(tile)) add(stretches, own.startS, own.startS + own.durationS);
    }
  }
  return stretches;
}

/** Neighbours become one stretch. */
function add(stretches: [number, number][], fromS: number, toS: number): void {
  const last = stretches[stretches.length - 1];
  if (last && fromS - last[1] < 1e-6) last[1] = Math.max(last[1], toS);
  else stretches.push([fromS, toS]);
}
