/** How enhancement weighs extent against height. */
export interface EnhanceSettings {
  timeCount: number;
  /** Exponent of a cluster's extent, E. */
  extent: number;
  /** Exponent of the height, H. */
  height: number;
  /** Distance between neighbouring heights, in z. */
  step: number;
}

/** Scratch of `enhance`, for maps of one size. */
export interface EnhanceScratch {
  order: Uint32Array;
  parent: Int32Array;
  extent: Int32Array;
  /** What a root's cluster was given so far; of others, less what their root had when they joined. */
  given: Float64Array;
  roots: Int32Array;
}

export function enhanceScratch(featureCount: number): EnhanceScratch {
  return {
    order: new Uint32Array(featureCount),
    parent: new Int32Array(featureCount),
    extent: new Int32Array(featureCount),
    given: new Float64Array(featureCount),
    roots: new Int32Array(featureCount),
  };
}

/**
 * Threshold-free enhancement of the points of one sign: at each height h = step, 2 step, ... a point
 * is given extent^E h^H step, extent being the number of points of its cluster of points at least h
 * high (4-neighbourhood).
 * Layout: `z[start + f * timeCount + t]`, `out[f * timeCount + t]`; points of the other sign and
 * below the first height are 0. Overwrites `out`; returns its largest value; mutates `scratch`.
 * Cost: heights are gone through once, from the highest, and points join clusters as they appear:
 * a sort, and one step for each cluster alive at each height.
 * Source: Smith and Nichols 2009, equation 1 as a sum; union-find with path halving, Tarjan 1975.
 */
export function enhance(
  z: Float32Array,
  start: number,
  sign: -1 | 1,
  out: Float64Array,
  settings: EnhanceSettings,
  scratch: EnhanceScratch,
): number {
  const { order, parent, given, roots } = scratch;
  const { extent, height, step } = settings;
  const size = out.length;
  let points = 0;
  parent.fill(-1);
  for (let x = 0; x < size; x++) if (z[start + x] * sign >= step) order[points++] = x;
  const sorted = order.subarray(0, points);
  sorted.sort((a, b) => (z[start + b] - z[start + a]) * sign);
  let rootCount = 0;
  let next = 0;
  const highest = points === 0 ? 0 : Math.floor((z[start + sorted[0]] * sign) / step);
  for (let level = highest; level >= 1; level--) {
    const h = level * step;
    while (next < points && z[start + sorted[next]] * sign >= h) {
      const point = sorted[next++];
      add(point, settings.timeCount, size, scratch);
      roots[rootCount++] = point;
    }
    let kept = 0;
    for (let i = 0; i < rootCount; i++) {
      const root = roots[i];
      if (parent[root] !== root) continue;
      roots[kept++] = root;
      given[root] += scratch.extent[root] ** extent * h ** height * step;
    }
    rootCount = kept;
  }
  return collect(sorted, out, scratch);
}

/** Lets a point appear, and joins it with its neighbours that are there. */
function add(point: number, timeCount: number, size: number, scratch: EnhanceScratch): void {
  const { parent, extent, given } = scratch;
  parent[point] = point;
  extent[point] = 1;
  given[point] = 0;
  const t = point % timeCount;
  if (t > 0) join(point, point - 1, scratch);
  if (t < timeCount - 1) join(point, point + 1, scratch);
  if (point >= timeCount) join(point, point - timeCount, scratch);
  if (point + timeCount < size) join(point, point + timeCount, scratch);
}

/** Puts the smaller cluster under the larger one's root; paths stay short without being halved. */
function join(point: number, neighbour: number, { parent, extent, given }: EnhanceScratch): void {
  if (parent[neighbour] === -1) return;
  const a = topOf(parent, point);
  const b = topOf(parent, neighbour);
  if (a === b) return;
  const root = extent[a] >= extent[b] ? a : b;
  const child = root === a ? b : a;
  parent[child] = root;
  extent[root] += extent[child];
  given[child] -= given[root];
}

function topOf(parent: Int32Array, point: number): number {
  let at = point;
  while (parent[at] !== at) at = parent[at];
  return at;
}

/** A point's value is what it and all above it were given. */
function collect(points: Uint32Array, out: Float64Array, scratch: EnhanceScratch): number {
  const { parent, given } = scratch;
  let largest = 0;
  out.fill(0);
  for (const point of points) {
    let value = given[point];
    for (let at = point; parent[at] !== at;) {
      at = parent[at];
      value += given[at];
    }
    out[point] = value;
    if (value > largest) largest = value;
  }
  return largest;
}
