/** Scratch of the cluster kernel, one entry a feature. `parent` is -1 outside of clusters. */
export interface ClusterForest {
  parent: Int32Array;
  mass: Float64Array;
}

export function clusterForest(featureCount: number): ClusterForest {
  return {
    parent: new Int32Array(featureCount).fill(-1),
    mass: new Float64Array(featureCount),
  };
}

/**
 * Joins points of one sign into clusters over neighbouring frequencies and times (4-neighbourhood).
 * Layout: `z[start + f * timeCount + t]`; `points` lists f * timeCount + t, ascending.
 * Returns the largest cluster mass, the sum of |z| (0 without points). On return a point whose
 * parent is itself is the root, and first point, of a cluster, and `mass[root]` is its mass, summed
 * in the same order for observed and surrogate maps. Mutates `forest`, whose parents must be -1 on
 * entry: see `releaseClusters`. Allocates nothing.
 * Cost: a constant a point, near enough. Source: Maris and Oostenveld 2007; union-find with path
 * halving, Tarjan 1975.
 */
export function joinClusters(
  z: Float32Array,
  start: number,
  points: Int32Array,
  forest: ClusterForest,
  size: { pointCount: number; timeCount: number },
): number {
  const { parent, mass } = forest;
  const { pointCount, timeCount } = size;
  let largest = 0;
  for (let i = 0; i < pointCount; i++) {
    const point = points[i];
    parent[point] = point;
    mass[point] = Math.abs(z[start + point]);
    let root = point;
    if (point % timeCount !== 0 && parent[point - 1] !== -1) {
      root = unite(parent, mass, root, rootOf(parent, point - 1));
    }
    if (point >= timeCount && parent[point - timeCount] !== -1) {
      root = unite(parent, mass, root, rootOf(parent, point - timeCount));
    }
    if (mass[root] > largest) largest = mass[root];
  }
  return largest;
}

/** Resets the parents of these points, so that the forest can be used again. */
export function releaseClusters(
  points: Int32Array,
  pointCount: number,
  forest: ClusterForest,
): void {
  for (let i = 0; i < pointCount; i++) forest.parent[points[i]] = -1;
}

/** The root of a point's cluster; halves the path on the way. */
export function rootOf(parent: Int32Array, point: number): number {
  let at = point;
  while (parent[at] !== at) {
    parent[at] = parent[parent[at]];
    at = parent[at];
  }
  return at;
}

function unite(parent: Int32Array, mass: Float64Array, a: number, b: number): number {
  if (a === b) return a;
  // The smaller index stays the root: it is the cluster's first point in reading order.
  const root = a < b ? a : b;
  const child = a < b ? b : a;
  parent[child] = root;
  mass[root] += mass[child];
  return root;
}
