import type { Axes, Cluster } from '../types';
import type { Tail } from '../plan';
import { ties } from '../ties';
import type { ClaimMaps } from './correction';
import { ascending, countAtLeast } from './distribution';
import { regions } from './edges';
import { permutationP } from './p-value';
import { tailSigns } from './tail';

/**
 * The clusters of the observed z map: points beyond the forming threshold, positive and negative
 * apart, joined within a pair over neighbouring frequencies and times; p from the largest mass of
 * each permutation over all pairs and the tail's signs. Largest mass first.
 * Source: Maris and Oostenveld 2007.
 */
export function observedClusters(
  axes: Axes,
  maps: Pick<ClaimMaps, 'z' | 'maxClusterMass'>,
  tail: Tail,
  clusterFormingZ: number,
): Cluster[] {
  const timeCount = axes.timesS.length;
  const featureCount = axes.frequenciesHz.length * timeCount;
  const sorted = ascending(maps.maxClusterMass);
  const clusters: Cluster[] = [];
  for (let pair = 0; pair < axes.pairs.length; pair++) {
    const start = pair * featureCount;
    for (const sign of tailSigns(tail)) {
      const wanted = (point: number) => maps.z[start + point] * sign > clusterFormingZ;
      for (const points of regions(maps.z, start, featureCount, timeCount, wanted)) {
        const mass = massOf(maps.z, start, points);
        const exceedances = countAtLeast(sorted, mass * (1 - ties.mass));
        const p = permutationP(exceedances, maps.maxClusterMass.length);
        clusters.push({ pair, sign, mass, size: points.length, points, exceedances, p });
      }
    }
  }
  return clusters.sort((a, b) => b.mass - a.mass || a.pair - b.pair || a.points[0] - b.points[0]);
}

function massOf(z: Float32Array, start: number, points: number[]): number {
  return points.reduce((mass, point) => mass + Math.abs(z[start + point]), 0);
}
