import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { cellOutline } from '../../../src/lib/figures/outline';

const unit = { x: (column: number) => column, y: (row: number) => row };

function outlineOf(rows: string[]): string {
  const columns = rows[0]!.length;
  return cellOutline((column, row) => rows[row]![column] === '#', {
    columns,
    rows: rows.length,
    ...unit,
  });
}

/** Each loop's corners as numbers. */
function loops(path: string): [number, number][][] {
  return path
    .split('Z')
    .filter(Boolean)
    .map((part) => part.slice(1).split('L'))
    .map((corners) => corners.map((corner) => corner.split(' ').map(Number) as [number, number]));
}

/** Signed area by the shoelace formula; screens count y downwards, so clockwise is positive. */
function area(corners: [number, number][]): number {
  return (
    corners.reduce((sum, [x, y], i) => {
      const [nextX, nextY] = corners[(i + 1) % corners.length]!;
      return sum + x * nextY - nextX * y;
    }, 0) / 2
  );
}

/** Regions of true cells joined over their four sides. */
function regionCount(cells: boolean[][]): number {
  const seen = cells.map((row) => row.map(() => false));
  const flood = (row: number, column: number): void => {
    if (!cells[row]?.[column] || seen[row]![column]) return;
    seen[row]![column] = true;
    flood(row - 1, column);
    flood(row + 1, column);
    flood(row, column - 1);
    flood(row, column + 1);
  };
  let count = 0;
  cells.forEach((cellsOfRow, row) =>
    cellsOfRow.forEach((inside, column) => {
      if (!inside || seen[row]![column]) return;
      count += 1;
      flood(row, column);
    }),
  );
  return count;
}

describe('cellOutline', () => {
  test('goes around one cell along its four edges', () => {
    expect(outlineOf(['...', '.#.', '...'])).toBe('M1 1L2 1L2 2L1 2Z');
  });

  test('drops corners that lie on a straight side', () => {
    expect(outlineOf(['###'])).toBe('M0 0L3 0L3 1L0 1Z');
  });

  test('gives a hole a loop of its own, the other way round', () => {
    const found = loops(outlineOf(['###', '#.#', '###'])).map(area);
    expect(found.sort((a, b) => a - b)).toEqual([-1, 9]);
  });

  test('keeps cells that touch at a corner apart, as 4-neighbourhood does', () => {
    expect(loops(outlineOf(['#.', '.#'])).map(area)).toEqual([1, 1]);
    expect(loops(outlineOf(['.#', '#.'])).map(area)).toEqual([1, 1]);
  });

  test('is empty where nothing is inside', () => {
    expect(outlineOf(['..', '..'])).toBe('');
  });

  test('encloses as much area as there are cells, one outer loop a region, whatever the set', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 7 }).chain((columns) =>
          fc.array(fc.array(fc.boolean(), { minLength: columns, maxLength: columns }), {
            minLength: 1,
            maxLength: 7,
          }),
        ),
        (cells) => {
          const path = cellOutline((column, row) => cells[row]![column]!, {
            columns: cells[0]!.length,
            rows: cells.length,
            ...unit,
          });
          const areas = loops(path).map(area);
          const enclosed = areas.reduce((sum, part) => sum + part, 0);
          expect(enclosed).toBe(cells.flat().filter(Boolean).length);
          expect(areas.filter((part) => part > 0).length).toBe(regionCount(cells));
        },
      ),
    );
  });
});
