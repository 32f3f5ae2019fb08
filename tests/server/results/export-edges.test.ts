import { describe, expect, test } from 'vitest';
import { edgesTsv } from '$lib/model/edge-table';
import { exportCautions, tsvCell } from '$lib/model/result-table';
import { sampleEdge } from '../../engine/result/sample-edge';

describe('tsvCell', () => {
  test('writes numbers with a dot and all digits, and n/a for what is absent', () => {
    expect(tsvCell(-0.1234567890123)).toBe('-0.1234567890123');
    expect(tsvCell(null)).toBe('n/a');
    expect(tsvCell(Number.NaN)).toBe('n/a');
  });

  test('leaves no text that a spreadsheet would run as a formula', () => {
    expect(['=1+1', '+A1', '-A1', '@SUM(A1)', ' =1'].map(tsvCell)).toEqual([
      "'=1+1",
      "'+A1",
      "'-A1",
      "'@SUM(A1)",
      "' =1",
    ]);
    expect(tsvCell('C3')).toBe('C3');
  });

  test('keeps a cell one cell and a line one line', () => {
    expect(tsvCell('a\tb\r\nc')).toBe('a b c');
  });
});

describe('edgesTsv', () => {
  test('is a line of names and a line for each edge, all of equal length', () => {
    const axes = {
      sites: ['=C3', 'P4'],
      pairs: [[0, 1]] as [number, number][],
      frequenciesHz: [10],
      timesS: [0],
    };
    const lines = edgesTsv([sampleEdge(), sampleEdge({ cluster: null })], axes, 'ispc').split('\n');
    expect(lines.length).toBe(4);
    expect(lines[3]).toBe('');
    const cells = lines.slice(0, 3).map((line) => line.split('\t'));
    expect(new Set(cells.map((row) => row.length)).size).toBe(1);
    expect(cells[1]!.slice(0, 4)).toEqual(["'=C3", 'P4', '8', '12']);
    expect(cells[2]!.at(-1)).toBe('n/a');
  });

  test('marks the edges whose lag has a simpler explanation than synchrony', () => {
    const axes = {
      sites: ['C3', 'P4'],
      pairs: [[0, 1]] as [number, number][],
      frequenciesHz: [10],
      timesS: [0],
    };
    const edges = [sampleEdge({ lagARad: 0.05 }), sampleEdge({ lagARad: 0.71 })];
    const [head, ...rows] = edgesTsv(edges, axes, 'ispc').trimEnd().split('\n');
    const at = head!.split('\t').indexOf('lag_near_zero');
    expect(rows.map((row) => row.split('\t')[at])).toEqual(['true', 'false']);
  });
});

describe('exportCautions', () => {
  test('a null without synchrony takes its caution along', () => {
    expect(
      exportCautions('max-statistic', { measure: 'ispc', null: 'trial-order' }).join(' '),
    ).toContain('no synchrony');
    expect(
      exportCautions('max-statistic', { measure: 'ispc', null: 'labels' }).join(' '),
    ).not.toContain('no synchrony');
  });
});
