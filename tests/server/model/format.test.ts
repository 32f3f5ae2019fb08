import { describe, expect, it } from 'vitest';
import {
  formatBytes,
  formatCount,
  formatDate,
  formatDateTime,
  formatNumber,
  formatP,
  formatSeconds,
  formatSigned,
} from '$lib/model/format';

describe('formatNumber', () => {
  it('has a true minus, thousands apart, and as many decimals as asked for', () => {
    expect(formatNumber(-1234.5678, 2)).toBe('−1,234.57');
    expect(formatNumber(0.3, 3)).toBe('0.300');
  });

  it('never writes a negative zero', () => {
    expect(formatNumber(-0.0004, 2)).toBe('0.00');
  });

  it.each([NaN, Infinity, null, undefined])('shows a dash for %s', (value) => {
    expect(formatNumber(value, 2)).toBe('–');
  });
});

describe('formatSigned', () => {
  it('has an explicit plus and a true minus, and neither at zero', () => {
    expect([0.294, -0.12, 0, -0.0001].map((x) => formatSigned(x, 2))).toEqual([
      '+0.29',
      '−0.12',
      '0.00',
      '0.00',
    ]);
  });
});

describe('formatP', () => {
  it('has four decimals, and two digits where four decimals would be none', () => {
    expect([1, 0.05, 1 / 5001, 0.0001, 1 / 100_001].map(formatP)).toEqual([
      '1.0000',
      '0.0500',
      '0.0002',
      '0.0001',
      '0.00001',
    ]);
  });

  it('never rounds a positive p to zero', () => {
    for (let p = 1; p > 1e-12; p /= 7) expect(Number(formatP(p))).toBeGreaterThan(0);
  });
});

describe('formatCount', () => {
  it('names one thing in the singular and any other number in the plural', () => {
    expect(formatCount(180_544)).toBe('180,544');
    expect([0, 1, 7].map((n) => formatCount(n, 'edge'))).toEqual(['0 edges', '1 edge', '7 edges']);
    expect(formatCount(2, 'study', 'studies')).toBe('2 studies');
  });
});

describe('formatSeconds', () => {
  it.each([
    [0, '0 s'],
    [0.0042, '4.2 ms'],
    [0.037, '37 ms'],
    [0.37, '0.37 s'],
    [-0.2, '−0.2 s'],
    [41.2, '41 s'],
    [59.7, '1 min'],
    [200, '3 min 20 s'],
    [3600, '1 h'],
    [7500, '2 h 5 min'],
  ])('writes %d s as %s', (seconds, text) => {
    expect(formatSeconds(seconds)).toBe(text);
  });

  it('keeps the decimals asked for', () => {
    expect(formatSeconds(0.2, 3)).toBe('0.200 s');
  });
});

describe('formatBytes', () => {
  it.each([
    [0, '0 B'],
    [999, '999 B'],
    [1000, '1.0 kB'],
    [2_596_896, '2.6 MB'],
    [999_999, '1.0 MB'],
    [2 * 1024 ** 3, '2.1 GB'],
    [64_000_000, '64 MB'],
  ])('writes %d bytes as %s (SI prefixes, powers of 1000)', (bytes, text) => {
    expect(formatBytes(bytes)).toBe(text);
  });
});

describe('formatDate', () => {
  it('is in UTC wherever it is read, from a date or its ISO text', () => {
    const late = '2026-11-24T23:59:00.000Z';
    expect(formatDate(late)).toBe('24 Nov 2026');
    expect(formatDateTime(new Date(late))).toBe('24 Nov 2026, 23:59 UTC');
  });

  it('shows a dash for what is no date', () => {
    expect(formatDate('yesterday')).toBe('–');
    expect(formatDateTime(null)).toBe('–');
  });
});
