/** Cells of one colour as one path: a map of thousands of cells stays a few dozen elements. */
export interface CellPath {
  level: number;
  path: string;
}

interface Grid {
  columns: number;
  rows: number;
  /** The step of a cell, or null to leave it out. */
  level(column: number, row: number): number | null;
  /** Pixel edge of a column's left side; `columns` gives the right side of the last. */
  x(column: number): number;
  y(row: number): number;
  /** Pixels left free on the right and below each cell; 0 joins neighbours in a row. */
  gap?: number;
}

/** Groups the cells of a grid by step, runs of one step in a row joined to one rectangle. */
export function cellPaths(grid: Grid): CellPath[] {
  const parts = new Map<number, string[]>();
  const gap = grid.gap ?? 0;
  for (let row = 0; row < grid.rows; row++) {
    let column = 0;
    while (column < grid.columns) {
      const level = grid.level(column, row);
      let end = column + 1;
      while (gap === 0 && end < grid.columns && grid.level(end, row) === level) end++;
      if (level !== null) {
        const list = parts.get(level) ?? [];
        list.push(rectangle(grid, column, end, row, gap));
        parts.set(level, list);
      }
      column = end;
    }
  }
  return [...parts]
    .sort((one, other) => one[0] - other[0])
    .map(([level, list]) => ({ level, path: list.join('') }));
}

function rectangle(grid: Grid, from: number, to: number, row: number, gap: number): string {
  const left = round(grid.x(from));
  const top = round(grid.y(row));
  const width = round(grid.x(to) - grid.x(from) - gap);
  const height = round(grid.y(row + 1) - grid.y(row) - gap);
  return `M${left} ${top}h${width}v${height}h${-width}z`;
}

function round(value: number): number {
  return Math.round(value * 100) / 100;
}
