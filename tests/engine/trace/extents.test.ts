import { describe, expect, it } from 'vitest';
import { fillExtents, type Columns, type Extents } from '$lib/figures/traces/extents';
import type { TraceData } from '$lib/figures/traces/trace-data';
import { unreadIn } from '$lib/figures/traces/unread';
import { cutPieces } from '../../../workers/trace/pieces';
import { fillPyramid, pyramidLength, pyramidLevels } from '../../../workers/trace/pyramid';

const RATE = 100;
const RECORD_S = 1;
const segments = [
  { startS: 0.25, firstRecord: 0, recordCount: 40 },
  { startS: 60, firstRecord: 40, recordCount: 20 },
];

/** One channel of 60 records whose data are all there, or only their envelopes. */
function traceData(withTiles: boolean) {
  const all = Int16Array.from({ length: 60 * RATE }, (_, i) =>
    Math.round(8000 * Math.sin(i / 9) + 3000 * Math.sin(i * 1.7)),
  );
  const pieces = cutPieces(segments, RECORD_S, 16);
  const tiles = cutPieces(segments, RECORD_S, 3);
  const samplesOf = ({ firstRecord, recordCount }: (typeof pieces)[number]) =>
    all.slice(firstRecord * RATE, (firstRecord + recordCount) * RATE);
  const levelsOf = (piece: number) => pyramidLevels(pieces[piece].recordCount * RATE, 8);
  const pyramids = pieces.map((piece, i) => {
    const out = new Int16Array(pyramidLength(levelsOf(i)));
    fillPyramid(samplesOf(piece), levelsOf(i), out);
    return [out];
  });
  const data = {
    file: { channels: [{ samplingRateHz: RATE }], pieces, tiles, baseSamples: 8 },
    pyramids,
    levelsOf,
    tile: (index: number) => (withTiles ? [samplesOf(tiles[index])] : null),
  };
  return { all, data: data as unknown as TraceData };
}

function extentsOf(data: TraceData, columns: Columns): Extents {
  const out = { low: new Float32Array(columns.count), high: new Float32Array(columns.count) };
  fillExtents(data, 0, columns, out);
  return out;
}

/** Each sample with its time. */
function timed(all: Int16Array): { timeS: number; value: number }[] {
  return segments.flatMap(({ startS, firstRecord, recordCount }) =>
    Array.from({ length: recordCount * RATE }, (_, i) => ({
      timeS: startS + i / RATE,
      value: all[firstRecord * RATE + i],
    })),
  );
}

describe('fillExtents', () => {
  it.each([
    ['samples, 4 a column', true, { startS: 3, secondsPerColumn: 0.04, count: 300 }],
    ['samples across the gap', true, { startS: 38, secondsPerColumn: 0.06, count: 500 }],
    ['envelopes, 20 samples a column', false, { startS: 0, secondsPerColumn: 0.2, count: 450 }],
    [
      'envelopes where samples are missing',
      false,
      { startS: 30, secondsPerColumn: 0.04, count: 400 },
    ],
  ])('shows every sample in its column or the next: %s', (_, withTiles, columns) => {
    const { all, data } = traceData(withTiles);
    const { low, high } = extentsOf(data, columns);
    for (const { timeS, value } of timed(all)) {
      const c = Math.floor((timeS - columns.startS) / columns.secondsPerColumn + 1e-9);
      if (c < 1 || c >= columns.count - 1) continue;
      const near = [c - 1, c, c + 1].filter((k) => low[k] <= high[k]);
      expect(Math.min(...near.map((k) => low[k]))).toBeLessThanOrEqual(value);
      expect(Math.max(...near.map((k) => high[k]))).toBeGreaterThanOrEqual(value);
    }
  });

  it('has the exact range of each column where samples are there', () => {
    const { all, data } = traceData(true);
    const columns = { startS: 3, secondsPerColumn: 0.04, count: 200 };
    const { low, high } = extentsOf(data, columns);
    const samples = timed(all);
    for (let c = 1; c < columns.count; c++) {
      const inColumn = (k: number) =>
        samples
          .filter(({ timeS }) => Math.floor((timeS - 3) / 0.04 + 1e-9) === k)
          .map(({ value }) => value);
      const [own, before] = [inColumn(c), inColumn(c - 1)];
      // A column also reaches to the one before it, so that the line has no holes.
      expect(low[c]).toBe(Math.min(...own, Math.max(...before)));
      expect(high[c]).toBe(Math.max(...own, Math.min(...before)));
    }
  });

  it('leaves the columns of a gap, and those beyond the ends, empty', () => {
    const { data } = traceData(true);
    const columns = { startS: -5, secondsPerColumn: 0.1, count: 1000 };
    const { low, high } = extentsOf(data, columns);
    const isEmpty = (timeS: number) => {
      const c = Math.floor((timeS + 5) / 0.1);
      return low[c] > high[c];
    };
    for (const timeS of [-4, 0, 40.5, 50, 59.8, 80.3, 90])
      expect(isEmpty(timeS), `${timeS} s`).toBe(true);
    for (const timeS of [0.4, 20, 40.1, 60.1, 79.8])
      expect(isEmpty(timeS), `${timeS} s`).toBe(false);
  });

  it('draws straight lines between samples where they lie further apart than columns', () => {
    const { all, data } = traceData(true);
    // Ten columns a sample, across the border of two tiles at 3.25 s.
    const columns = { startS: 3.2, secondsPerColumn: 0.001, count: 100 };
    const { low, high } = extentsOf(data, columns);
    for (let c = 1; c < columns.count; c++) {
      const place = (3.2 + c * 0.001 - 0.25) * RATE;
      const s = Math.floor(place + 1e-9);
      const line = all[s] + (all[s + 1] - all[s]) * (place - s);
      expect(low[c] - 1).toBeLessThanOrEqual(line);
      expect(high[c] + 1).toBeGreaterThanOrEqual(line);
    }
  });
});

describe('unreadIn', () => {
  it('joins what is not read yet, and leaves gaps out', () => {
    const { data } = traceData(false);
    data.pyramids[1] = null;
    data.pyramids[2] = null;
    data.pyramids[3] = null;
    const columns = { startS: 0, secondsPerColumn: 0.1, count: 1000 };
    expect(unreadIn(data, columns, false)).toEqual([
      [16.25, 40.25],
      [60, 76],
    ]);
    expect(unreadIn(traceData(false).data, columns, false)).toEqual([]);
  });
});
