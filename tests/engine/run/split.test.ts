import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { binValues } from '$lib/figures/bins';
import { npyParts, parseNpy } from '../../../workers/engine/npy';
import { partSize, rangesLeft, splitRange } from '../../../workers/run/split';

const items = (ranges: { from: number; to: number }[]) =>
  ranges.flatMap(({ from, to }) => Array.from({ length: to - from }, (_, i) => from + i));

describe('the work of a run', () => {
  it('is split into parts that cover it once, in order, none too large', () => {
    fc.assert(
      fc.property(
        fc.nat(300),
        fc.nat(300),
        fc.integer({ min: 1, max: 40 }),
        (from, count, size) => {
          const parts = splitRange({ from, to: from + count }, size);
          expect(items(parts)).toEqual(items([{ from, to: from + count }]));
          expect(parts.every((part) => part.to - part.from <= size)).toBe(true);
        },
      ),
    );
  });

  it('goes on with exactly what a checkpoint leaves, whatever its blocks were', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 200 }),
        fc.integer({ min: 1, max: 20 }),
        fc.array(fc.boolean(), { minLength: 200, maxLength: 200 }),
        (count, size, finished) => {
          const blocks = splitRange({ from: 0, to: count }, size);
          const done = blocks.filter((_, i) => finished[i]);
          const left = rangesLeft(count, [...done].reverse());
          const whole = [...items(done), ...items(left)].sort((a, b) => a - b);
          expect(whole).toEqual(items([{ from: 0, to: count }]));
        },
      ),
    );
  });

  it('gives every worker several parts, so that all end at about the same time', () => {
    expect(partSize(496, 2, 8, 32)).toBe(31);
    expect(partSize(2016, 2, 8, 32)).toBe(32);
    expect(partSize(3, 4, 8, 32)).toBe(1);
  });
});

describe('binValues', () => {
  it('counts every finite value in the bin that holds it', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -1e3, max: 1e3, noNaN: true })), (values) => {
        const bins = binValues([...values, NaN, -Infinity]);
        expect(bins.reduce((sum, bin) => sum + bin.count, 0)).toBe(values.length);
      }),
    );
  });

  it('puts its edges at round numbers', () => {
    const bins = binValues([0.31, 2.9], 10);
    expect(bins.map(({ count }) => count)).toEqual([1, 0, 0, 0, 0, 1]);
    expect(bins[0]!.to).toBeCloseTo(0.5, 12);
  });
});

describe('NPY', () => {
  it('writes the bytes that the format states (numpy.lib.format, version 1.0)', () => {
    const [header, data] = npyParts(Float32Array.of(1, 2), [2]);
    const text = new TextDecoder('latin1').decode(header);
    expect(text.slice(0, 8)).toBe('\x93NUMPY\x01\x00');
    expect(header.length % 64).toBe(0);
    expect(text).toContain("{'descr': '<f4', 'fortran_order': False, 'shape': (2,), }");
    expect(text.endsWith('\n')).toBe(true);
    expect([...data]).toEqual([0, 0, 0x80, 0x3f, 0, 0, 0, 0x40]);
  });

  it('reads back what it wrote', () => {
    const parts = npyParts(Uint16Array.of(1, 2, 3, 4, 5, 6), [3, 2]);
    const file = new Uint8Array(Buffer.concat(parts));
    expect(parseNpy(file)).toMatchObject({ dtype: '<u2', shape: [3, 2] });
    expect(parseNpy(file).data).toEqual(Uint16Array.of(1, 2, 3, 4, 5, 6));
  });
});
