export type Point = [number, number, number];

export interface Sphere {
  centre: Point;
  radius: number;
  /** Standard deviation of the points' distances from the centre, in radii. */
  spread: number;
}

/**
 * The sphere nearest to the points in the algebraic least-squares sense: |p|^2 = 2 c.p + k is
 * linear in the centre c and k. Fewer than four points, or points that fix no sensible centre,
 * give a centre at the origin.
 */
export function fitSphere(points: Point[]): Sphere {
  const fitted = points.length < 4 ? null : solveCentre(points);
  const size = farthest(points);
  const isSensible = fitted !== null && Math.hypot(...fitted) <= 2 * size;
  return describe(points, isSensible ? fitted : [0, 0, 0]);
}

function farthest(points: Point[]): number {
  return points.reduce((most, point) => Math.max(most, Math.hypot(...point)), 0);
}

function describe(points: Point[], centre: Point): Sphere {
  const distances = points.map((p) =>
    Math.hypot(p[0] - centre[0], p[1] - centre[1], p[2] - centre[2]),
  );
  const radius = distances.reduce((sum, d) => sum + d, 0) / Math.max(1, distances.length);
  const variance =
    distances.reduce((sum, d) => sum + (d - radius) ** 2, 0) / Math.max(1, distances.length);
  return { centre, radius, spread: radius > 0 ? Math.sqrt(variance) / radius : 0 };
}

function solveCentre(points: Point[]): Point | null {
  // Scaled to about 1, so that the pivots say whether the points fix a centre, in any unit.
  const scale = farthest(points);
  if (!(scale > 0)) return null;
  const normal = Array.from({ length: 4 }, () => new Float64Array(5));
  for (const point of points) {
    const [x, y, z] = point.map((value) => value / scale);
    const row = [2 * x, 2 * y, 2 * z, 1, x * x + y * y + z * z];
    for (let i = 0; i < 4; i++) for (let j = 0; j < 5; j++) normal[i][j] += row[i] * row[j];
  }
  const solution = solveLinear(normal);
  return solution ? [solution[0] * scale, solution[1] * scale, solution[2] * scale] : null;
}

/** Gaussian elimination with row pivots on [matrix | right side]; null where it is singular. */
function solveLinear(rows: Float64Array[]): number[] | null {
  const n = rows.length;
  for (let column = 0; column < n; column++) {
    let pivot = column;
    for (let i = column + 1; i < n; i++) {
      if (Math.abs(rows[i][column]) > Math.abs(rows[pivot][column])) pivot = i;
    }
    if (Math.abs(rows[pivot][column]) < 1e-9) return null;
    [rows[column], rows[pivot]] = [rows[pivot], rows[column]];
    for (let i = 0; i < n; i++) {
      if (i === column) continue;
      const factor = rows[i][column] / rows[column][column];
      for (let j = column; j <= n; j++) rows[i][j] -= factor * rows[column][j];
    }
  }
  return rows.map((row, i) => row[n] / row[i]);
}
