import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cutPieces, piecesIn } from '../../../workers/trace/pieces';
import {
  chooseBase,
  fillPyramid,
  pyramidLength,
  pyramidLevels,
} from '../../../workers/trace/pyramid';

const digital = fc.integer({ min: -32768, max: 32767 });

describe('the envelope pyramid', () => {
  it('holds the smallest and largest sample of every bin at every level', () => {
    fc.assert(
      fc.property(
        fc.array(digital, { minLength: 1, maxLength: 700 }),
        fc.constantFrom(1, 3, 8, 16),
        (values, baseSamples) => {
          const samples = Int16Array.from(values);
          const levels = pyramidLevels(samples.length, baseSamples);
          const out = new Int16Array(pyramidLength(levels));
          fillPyramid(samples, levels, out);
          for (const { samplesPerBin, binCount, at } of levels) {
            expect(binCount).toBe(Math.ceil(samples.length / samplesPerBin));
            for (let bin = 0; bin < binCount; bin++) {
              const own = values.slice(bin * samplesPerBin, (bin + 1) * samplesPerBin);
              expect(out[at + 2 * bin]).toBe(Math.min(...own));
              expect(out[at + 2 * bin + 1]).toBe(Math.max(...own));
            }
          }
          expect(levels[levels.length - 1].binCount).toBeLessThanOrEqual(4);
        },
      ),
    );
  });

  it('keeps within the memory it is given, whatever the file’s size', () => {
    for (const fileBytes of [1e6, 236e6, 2e9, 50e9]) {
      const limit = 96e6;
      const base = chooseBase(fileBytes, limit);
      const samples = Math.ceil(fileBytes / 2);
      const bytes = pyramidLength(pyramidLevels(samples, base)) * 2;
      expect(bytes).toBeLessThanOrEqual(limit * 1.01);
    }
    expect(chooseBase(1e6, 96e6)).toBe(8);
  });
});

describe('cutPieces', () => {
  const segments = [
    { startS: 0.5, firstRecord: 0, recordCount: 5 },
    { startS: 100, firstRecord: 5, recordCount: 2 },
  ];

  it('covers every record once, in order, and never crosses a gap', () => {
    const pieces = cutPieces(segments, 2, 3);
    expect(pieces).toEqual([
      { segment: 0, firstRecord: 0, recordCount: 3, startS: 0.5, durationS: 6 },
      { segment: 0, firstRecord: 3, recordCount: 2, startS: 6.5, durationS: 4 },
      { segment: 1, firstRecord: 5, recordCount: 2, startS: 100, durationS: 4 },
    ]);
  });

  it('finds the pieces that touch a window', () => {
    const pieces = cutPieces(segments, 2, 3);
    expect(piecesIn(pieces, 0, 6.5)).toEqual([0, 1]);
    expect(piecesIn(pieces, 6.4, 101)).toEqual([0, 3]);
    expect(piecesIn(pieces, 20, 90)).toEqual([2, 2]);
    expect(piecesIn(pieces, 200, 300)).toEqual([3, 3]);
  });
});
