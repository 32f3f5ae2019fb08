import { piecesIn, type Piece } from '$workers/trace/pieces';
import type { TraceData } from './trace-data';

/** The figure's columns: column c covers seconds [startS + c * secondsPerColumn, ...). */
export interface Columns {
  startS: number;
  secondsPerColumn: number;
  count: number;
}

/** Smallest and largest digital value in each column; low above high where there is none. */
export interface Extents {
  low: Float32Array;
  high: Float32Array;
}

export function needsSamples(data: TraceData, columns: Columns): boolean {
  return data.file.channels.some(
    ({ samplingRateHz }) => samplingRateHz * columns.secondsPerColumn < data.file.baseSamples,
  );
}

/**
 * Fills the extents of one channel from its samples where the columns are finer than the envelope
 * and the samples are there, and from the envelope elsewhere. Allocates nothing.
 */
export function fillExtents(
  data: TraceData,
  channel: number,
  columns: Columns,
  out: Extents,
): void {
  out.low.fill(Infinity);
  out.high.fill(-Infinity);
  const { file } = data;
  const rate = file.channels[channel].samplingRateHz;
  const endS = columns.startS + columns.count * columns.secondsPerColumn;
  if (rate * columns.secondsPerColumn >= file.baseSamples) {
    const [from, to] = piecesIn(file.pieces, columns.startS, endS);
    for (let piece = from; piece < to; piece++) {
      addPyramid(data, { piece, channel, rate }, columns, [columns.startS, endS], out);
    }
  } else {
    const [from, to] = piecesIn(file.tiles, columns.startS, endS);
    for (let tile = from; tile < to; tile++) {
      const arrays = data.tile(tile);
      const stretch = file.tiles[tile];
      if (arrays) {
        const next = nextSample(data, tile, channel);
        addSamples(arrays[channel], { stretch, rate, next }, columns, out);
      } else {
        addCoarse(data, stretch, { channel, rate }, columns, out);
      }
    }
  }
  join(out, columns.count);
}

/** The envelope under a tile whose samples are not there yet. */
function addCoarse(
  data: TraceData,
  stretch: Piece,
  of: { channel: number; rate: number },
  columns: Columns,
  out: Extents,
): void {
  const span: [number, number] = [stretch.startS, stretch.startS + stretch.durationS];
  const [from, to] = piecesIn(data.file.pieces, span[0] + 1e-9, span[1] - 1e-9);
  for (let piece = from; piece < to; piece++)
    addPyramid(data, { piece, ...of }, columns, span, out);
}

function nextSample(data: TraceData, tile: number, channel: number): number | null {
  const following = data.file.tiles[tile + 1];
  if (!following || following.segment !== data.file.tiles[tile].segment) return null;
  return data.tile(tile + 1)?.[channel][0] ?? null;
}

function addPyramid(
  data: TraceData,
  of: { piece: number; channel: number; rate: number },
  columns: Columns,
  [spanStartS, spanEndS]: [number, number],
  out: Extents,
): void {
  const values = data.pyramids[of.piece]?.[of.channel];
  if (!values) return;
  const { startS } = data.file.pieces[of.piece];
  const samplesPerColumn = of.rate * columns.secondsPerColumn;
  const levels = data.levelsOf(of.piece, of.channel);
  let level = levels[0];
  for (const finer of levels) if (finer.samplesPerBin <= samplesPerColumn) level = finer;
  const binS = level.samplesPerBin / of.rate;
  const first = Math.max(0, Math.floor((spanStartS - startS) / binS));
  const end = Math.min(level.binCount, Math.ceil((spanEndS - startS) / binS));
  const bins = { values, at: level.at, first, end };
  const columnsPerBin = binS / columns.secondsPerColumn;
  const x0 = (startS - columns.startS) / columns.secondsPerColumn;
  if (columnsPerBin <= 1) addNarrowBins(bins, x0, columnsPerBin, columns.count, out);
  else addWideBins(bins, x0, columnsPerBin, columns.count, out);
}

interface Bins {
  values: Int16Array;
  at: number;
  first: number;
  end: number;
}

/** A bin narrower than a column belongs to the one under its middle. */
function addNarrowBins(
  { values, at, first, end }: Bins,
  x0: number,
  columnsPerBin: number,
  count: number,
  { low, high }: Extents,
): void {
  const binAt = (x: number) => Math.ceil((x - x0) / columnsPerBin - 0.5);
  const from = Math.max(0, Math.floor(x0 + first * columnsPerBin));
  const to = Math.min(count, Math.ceil(x0 + end * columnsPerBin));
  let bin = Math.max(first, binAt(from));
  for (let c = from; c < to; c++) {
    const stop = Math.min(end, binAt(c + 1));
    let least = 32767;
    let most = -32768;
    for (; bin < stop; bin++) {
      const binLeast = values[at + 2 * bin];
      const binMost = values[at + 2 * bin + 1];
      if (binLeast < least) least = binLeast;
      if (binMost > most) most = binMost;
    }
    if (least > most) continue;
    if (least < low[c]) low[c] = least;
    if (most > high[c]) high[c] = most;
  }
}

function addWideBins(
  { values, at, first, end }: Bins,
  x0: number,
  columnsPerBin: number,
  count: number,
  { low, high }: Extents,
): void {
  for (let bin = first; bin < end; bin++) {
    const x = x0 + bin * columnsPerBin;
    const to = Math.min(count, Math.ceil(x + columnsPerBin));
    for (let c = Math.max(0, Math.floor(x)); c < to; c++) {
      low[c] = Math.min(low[c], values[at + 2 * bin]);
      high[c] = Math.max(high[c], values[at + 2 * bin + 1]);
    }
  }
}

function addSamples(
  samples: Int16Array,
  of: { stretch: Piece; rate: number; next: number | null },
  columns: Columns,
  out: Extents,
): void {
  const { low, high } = out;
  const x0 = (of.stretch.startS - columns.startS) / columns.secondsPerColumn;
  const step = 1 / (of.rate * columns.secondsPerColumn);
  if (step <= 1) {
    addDense(samples, x0, step, columns.count, out);
    return;
  }
  // Samples lie further apart than columns: straight lines between them.
  const from = Math.max(0, Math.ceil(x0));
  const to = Math.min(columns.count, Math.ceil(x0 + samples.length * step));
  for (let c = from; c < to; c++) {
    const place = (c - x0) / step;
    const s = Math.min(samples.length - 1, Math.floor(place));
    const after = s + 1 < samples.length ? samples[s + 1] : (of.next ?? samples[s]);
    const value = samples[s] + (after - samples[s]) * Math.min(1, place - s);
    low[c] = Math.min(low[c], value);
    high[c] = Math.max(high[c], value);
  }
}

/** Several samples a column: the range of samples of each column is known beforehand. */
function addDense(
  samples: Int16Array,
  x0: number,
  step: number,
  count: number,
  { low, high }: Extents,
): void {
  const from = Math.max(0, Math.floor(x0));
  const to = Math.min(count, Math.ceil(x0 + samples.length * step));
  let s = Math.max(0, Math.ceil((from - x0) / step));
  for (let c = from; c < to; c++) {
    const stop = Math.min(samples.length, Math.ceil((c + 1 - x0) / step));
    // Whole numbers throughout: comparing with the columns' floats would cost several times more.
    let least = 32767;
    let most = -32768;
    for (; s < stop; s++) {
      const value = samples[s];
      if (value < least) least = value;
      if (value > most) most = value;
    }
    if (least > most) continue;
    if (least < low[c]) low[c] = least;
    if (most > high[c]) high[c] = most;
  }
}

/** Widens each column to touch the one before it, so that a steep trace has no holes. */
function join({ low, high }: Extents, count: number): void {
  let beforeLow = Infinity;
  let beforeHigh = -Infinity;
  for (let c = 0; c < count; c++) {
    const ownLow = low[c];
    const ownHigh = high[c];
    if (ownLow <= ownHigh && beforeLow <= beforeHigh) {
      if (ownLow > beforeHigh) low[c] = beforeHigh;
      else if (ownHigh < beforeLow) high[c] = beforeLow;
    }
    beforeLow = ownLow;
    beforeHigh = ownHigh;
  }
}

/**
 * Where the row's centre line lies, and how far the trace usually reaches from below it to above
 * (root mean squares of both sides); NaN where nothing is drawn.
 */
export function summarise(
  { low, high }: Extents,
  count: number,
): { middle: number; reach: number } {
  let sum = 0;
  let filled = 0;
  for (let c = 0; c < count; c++) {
    if (low[c] > high[c]) continue;
    sum += low[c] + high[c];
    filled++;
  }
  if (filled === 0) return { middle: 0, reach: NaN };
  const middle = sum / filled / 2;
  let above = 0;
  let below = 0;
  for (let c = 0; c < count; c++) {
    if (low[c] > high[c]) continue;
    above += (high[c] - middle) ** 2;
    below += (low[c] - middle) ** 2;
  }
  return { middle, reach: Math.sqrt(above / filled) + Math.sqrt(below / filled) };
}
