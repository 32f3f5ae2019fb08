import { PlanError } from '../errors';
import type { Plan } from '../plan';
import type { RecordingFacts } from '../types';
import { channelIndices, listed } from './recordings';

/** Perrin et al. 1989: order of the spline, Legendre terms, and the smoothing on the diagonal. */
const order = 4;
const terms = 20;
const smoothing = 1e-5;

/** Below four sites a sphere has no curvature to speak of. */
export const leastSitesForLaplacian = 4;

type Point = readonly [number, number, number];

/**
 * The spherical-spline surface Laplacian (Perrin et al. 1989; m = 4, Legendre terms 1 to 20,
 * lambda = 1e-5) of potentials at unit `points`, as a matrix: row by row `[site * count + other]`.
 * With G = g_m(cos) + lambda I, H = g_{m-1}(cos) and coefficients c of G c + c0 = V, sum c = 0, it is
 * H c: minus the Laplacian on the unit sphere, positive over a source, in uV per squared head radius.
 * @throws RangeError when two points are one.
 */
export function laplacianMatrix(points: Point[]): Float64Array {
  const count = points.length;
  const near = new Float64Array(count * count);
  const spline = new Float64Array(count * count);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < count; j++) {
      const cosine = Math.max(-1, Math.min(1, dot(points[i], points[j])));
      if (i !== j && cosine > 1 - 1e-9) {
        throw new RangeError(`laplacianMatrix: points ${i} and ${j} are one`);
      }
      [spline[i * count + j], near[i * count + j]] = splineValues(cosine);
    }
    spline[i * count + i] += smoothing;
  }
  const inverse = inverted(spline, count);
  const sums = Float64Array.from({ length: count }, (_, i) =>
    inverse.subarray(i * count, (i + 1) * count).reduce((sum, value) => sum + value, 0),
  );
  const total = sums.reduce((sum, value) => sum + value, 0);
  const out = new Float64Array(count * count);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < count; j++) {
      let sum = 0;
      for (let k = 0; k < count; k++) {
        const coefficient = inverse[k * count + j] - (sums[k] * sums[j]) / total;
        sum += near[i * count + k] * coefficient;
      }
      out[i * count + j] = sum;
    }
  }
  return out;
}

/** g_m and g_{m-1} at a cosine: (1/4 pi) sum_n (2n + 1) / (n (n + 1))^m P_n(x). */
function splineValues(x: number): [number, number] {
  let g = 0;
  let h = 0;
  let before = 1;
  let now = x;
  for (let n = 1; n <= terms; n++) {
    const part = (n * (n + 1)) ** (order - 1);
    const term = ((2 * n + 1) * now) / part;
    h += term;
    g += term / (n * (n + 1));
    [before, now] = [now, ((2 * n + 1) * x * now - n * before) / (n + 1)];
  }
  return [g / (4 * Math.PI), h / (4 * Math.PI)];
}

/** Gauss-Jordan elimination with row pivots. */
function inverted(matrix: Float64Array, count: number): Float64Array {
  const left = Array.from({ length: count }, (_, i) => [
    ...matrix.subarray(i * count, (i + 1) * count),
    ...Array.from({ length: count }, (_, j) => (i === j ? 1 : 0)),
  ]);
  for (let column = 0; column < count; column++) {
    let pivot = column;
    for (let i = column + 1; i < count; i++) {
      if (Math.abs(left[i][column]) > Math.abs(left[pivot][column])) pivot = i;
    }
    [left[column], left[pivot]] = [left[pivot], left[column]];
    const top = left[column];
    const scale = 1 / top[column];
    for (let k = 0; k < top.length; k++) top[k] *= scale;
    for (let i = 0; i < count; i++) {
      const factor = left[i][column];
      if (i === column || factor === 0) continue;
      for (let k = column; k < top.length; k++) left[i][k] -= factor * top[k];
    }
  }
  return Float64Array.from(left.flatMap((row) => row.slice(count)));
}

function dot(a: Point, b: Point): number {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}

/** Replaces every signal by the Laplacian at its site. */
export function applyLaplacian(signals: Float64Array[], matrix: Float64Array): Float64Array[] {
  const count = signals.length;
  return signals.map((signal, i) => {
    const out = new Float64Array(signal.length);
    for (let j = 0; j < count; j++) {
      const weight = matrix[i * count + j];
      const other = signals[j];
      for (let s = 0; s < out.length; s++) out[s] += weight * other[s];
    }
    return out;
  });
}

/**
 * The analysed sites of one recording as points of the unit sphere, in the plan's order.
 * @throws PlanError naming the sites without a position, or two at one place.
 */
export function sitePoints(plan: Plan, recording: RecordingFacts): Point[] {
  const indices = channelIndices(recording, plan.sites, 'sites');
  const positions = Array.from(indices, (i) => recording.channels[i].position);
  const without = plan.sites.filter((_, i) => !isPlace(positions[i]));
  if (without.length > 0) {
    throw new PlanError(
      'epoch.reference',
      `The surface Laplacian needs the position of every site, and ${recording.name} has none for ${listed(without)}: leave ${without.length > 1 ? 'them' : 'it'} out, add an electrodes.tsv, or take another reference.`,
    );
  }
  const points = positions.map((place): Point => {
    const { x, y, z } = place!;
    const length = Math.hypot(x, y, z);
    return [x / length, y / length, z / length];
  });
  points.forEach((point, i) => {
    const twin = points.findIndex((other, j) => j < i && dot(point, other) > 1 - 1e-9);
    if (twin < 0) return;
    throw new PlanError(
      'epoch.reference',
      `${plan.sites[twin]} and ${plan.sites[i]} are at one place in ${recording.name}, and the surface Laplacian needs different ones: leave one out, or mend the electrodes.tsv.`,
    );
  });
  return points;
}

function isPlace(place: { x: number; y: number; z: number } | null): boolean {
  return place !== null && Math.hypot(place.x, place.y, place.z) > 0;
}
