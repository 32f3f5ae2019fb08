interface Geometry {
  columns: number;
  rows: number;
  x(column: number): number;
  y(row: number): number;
}

/**
 * The border of a set of cells as an SVG path along the cells' own edges: it claims no finer
 * extent than the grid has. Cells touching only at a corner get borders of their own, as they
 * are no neighbours in time-frequency clusters.
 */
export function cellOutline(
  inside: (column: number, row: number) => boolean,
  { columns, rows, x, y }: Geometry,
): string {
  const next = borderSteps(inside, columns, rows);
  const parts: string[] = [];
  for (const [start, ends] of next) {
    while (ends.length > 0) parts.push(loop(start, next, columns, x, y));
  }
  return parts.join('');
}

/** Directed border steps by start corner, the inside on the right hand of each step. */
function borderSteps(
  inside: (column: number, row: number) => boolean,
  columns: number,
  rows: number,
): Map<number, number[]> {
  const next = new Map<number, number[]>();
  const corner = (column: number, row: number) => row * (columns + 1) + column;
  const step = (from: number, to: number) => {
    const list = next.get(from);
    if (list) list.push(to);
    else next.set(from, [to]);
  };
  const has = (column: number, row: number) =>
    column >= 0 && row >= 0 && column < columns && row < rows && inside(column, row);
  for (let row = 0; row < rows; row++) {
    for (let column = 0; column < columns; column++) {
      if (!inside(column, row)) continue;
      if (!has(column, row - 1)) step(corner(column, row), corner(column + 1, row));
      if (!has(column + 1, row)) step(corner(column + 1, row), corner(column + 1, row + 1));
      if (!has(column, row + 1)) step(corner(column + 1, row + 1), corner(column, row + 1));
      if (!has(column - 1, row)) step(corner(column, row + 1), corner(column, row));
    }
  }
  return next;
}

function loop(
  start: number,
  next: Map<number, number[]>,
  columns: number,
  x: (column: number) => number,
  y: (row: number) => number,
): string {
  const corners = [start];
  let before = -1;
  let at = start;
  do {
    const ends = next.get(at)!;
    const taken = ends.length > 1 ? rightTurn(before, at, ends, columns) : 0;
    before = at;
    at = ends.splice(taken, 1)[0]!;
    corners.push(at);
  } while (at !== start);
  const width = columns + 1;
  const kept = corners.slice(0, -1).filter((here, i, all) => {
    const previous = all[(i - 1 + all.length) % all.length]!;
    const following = all[(i + 1) % all.length]!;
    return here - previous !== following - here;
  });
  const points = kept.map((c) => `${number(x(c % width))} ${number(y(Math.floor(c / width)))}`);
  return `M${points.join('L')}Z`;
}

/** Where two cells meet at a corner only, turning right stays with the same cell. */
function rightTurn(before: number, at: number, ends: number[], columns: number): number {
  const width = columns + 1;
  const toward = new Map([
    [1, width],
    [width, -1],
    [-1, -width],
    [-width, 1],
  ]);
  const wanted = toward.get(at - before);
  const found = ends.findIndex((end) => end - at === wanted);
  return Math.max(0, found);
}

function number(value: number): number {
  return Math.round(value * 100) / 100;
}
