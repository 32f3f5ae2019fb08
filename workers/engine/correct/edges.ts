import { clusterForest, joinClusters, releaseClusters, rootOf } from '../../kernels/clusters';
import type { Edge } from '../types';
import type { Evidence } from './correction';
import { tailPWithInterval } from './p-value';
import { tailExceedances, tailSigns } from './tail';

/** What a correction says of an edge at its peak. */
export interface AdjustedP {
  adjustedP: number;
  adjustedPInterval: [number, number] | null;
}

/**
 * Claimed points of one correction, joined into connected regions of one pair and one sign
 * (4-neighbourhood); one edge a region, pairs ascending. `adjust` is asked at the peak, by index
 * into the whole map.
 */
export function regionEdges(
  evidence: Evidence,
  correction: string,
  claimed: Uint8Array,
  adjust: (peak: number) => AdjustedP,
): Edge[] {
  const { axes, maps, tail } = evidence;
  const featureCount = axes.frequenciesHz.length * axes.timesS.length;
  const edges: Edge[] = [];
  for (let pair = 0; pair < axes.pairs.length; pair++) {
    const start = pair * featureCount;
    for (const sign of tailSigns(tail)) {
      const wanted = (point: number) =>
        claimed[start + point] === 1 && maps.z[start + point] * sign > 0;
      for (const points of regions(maps.z, start, featureCount, axes.timesS.length, wanted)) {
        const peak = start + peakOf(maps.z, start, points);
        edges.push(edgeOf(evidence, correction, pair, points, adjust(peak), null));
      }
    }
  }
  return edges;
}

/** Connected regions of the wanted points of one pair's map, each ascending, first point first. */
export function regions(
  z: Float32Array,
  start: number,
  featureCount: number,
  timeCount: number,
  wanted: (point: number) => boolean,
): number[][] {
  const points = new Int32Array(featureCount);
  let pointCount = 0;
  for (let x = 0; x < featureCount; x++) if (wanted(x)) points[pointCount++] = x;
  if (pointCount === 0) return [];
  const forest = clusterForest(featureCount);
  joinClusters(z, start, points, forest, { pointCount, timeCount });
  const found = new Map<number, number[]>();
  for (const point of points.subarray(0, pointCount)) {
    const root = rootOf(forest.parent, point);
    const region = found.get(root);
    if (region) region.push(point);
    else found.set(root, [point]);
  }
  releaseClusters(points, pointCount, forest);
  return [...found.values()];
}

/** The point of largest |z|; the first of equal ones. */
function peakOf(z: Float32Array, start: number, points: number[]): number {
  let peak = points[0];
  for (const point of points) {
    if (Math.abs(z[start + point]) > Math.abs(z[start + peak])) peak = point;
  }
  return peak;
}

/** One claimed region of one pair, with its values at the peak. */
export function edgeOf(
  evidence: Evidence,
  correction: string,
  pair: number,
  points: number[],
  adjusted: AdjustedP,
  cluster: number | null,
): Edge {
  const { axes, maps, tail, permutations } = evidence;
  const timeCount = axes.timesS.length;
  const start = pair * axes.frequenciesHz.length * timeCount;
  const peakPoint = peakOf(maps.z, start, points);
  const at = start + peakPoint;
  const times = points.map((point) => point % timeCount);
  const frequencies = points.map((point) => axes.frequenciesHz[Math.floor(point / timeCount)]);
  const exceedances = tailExceedances(maps.upper[at], maps.lower[at], tail);
  const { p, interval } = tailPWithInterval(exceedances, permutations, tail);
  return {
    correction,
    pair,
    fromHz: least(frequencies),
    toHz: most(frequencies),
    fromS: axes.timesS[least(times)],
    toS: axes.timesS[most(times)],
    peakPoint,
    points: points.length,
    observedA: maps.observedA[at],
    observedB: maps.observedB[at],
    difference: maps.observedA[at] - maps.observedB[at],
    z: maps.z[at],
    p,
    pInterval: interval,
    ...adjusted,
    lagARad: maps.lagA[at],
    lagBRad: maps.lagB[at],
    cluster,
  };
}

// Not Math.min(...list): a region may hold more points than a call may have arguments.
function least(list: number[]): number {
  return list.reduce((a, b) => Math.min(a, b));
}

function most(list: number[]): number {
  return list.reduce((a, b) => Math.max(a, b));
}
