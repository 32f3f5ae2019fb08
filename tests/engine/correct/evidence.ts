import type { Axes, Plan } from '../../../workers/engine';
import type { ClaimMaps, Evidence } from '../../../workers/engine/correct/correction';
import { observedClusters } from '../../../workers/engine/correct/observed-clusters';
import { tailP } from '../../../workers/engine/correct/p-value';
import { tailExceedances } from '../../../workers/engine/correct/tail';

/** Axes of maps without recordings: pairs x frequencies x times. */
export function plainAxes(pairs: number, frequencies: number, times: number): Axes {
  return {
    sites: Array.from({ length: pairs + 1 }, (_, i) => `S${i}`),
    pairs: Array.from({ length: pairs }, (_, i): [number, number] => [0, i + 1]),
    frequenciesHz: Array.from({ length: frequencies }, (_, f) => 4 + 2 * f),
    timesS: Array.from({ length: times }, (_, t) => t / 10),
    samplingRateHz: 100,
  };
}

export interface PlainMaps {
  z: number[];
  upper?: number[];
  lower?: number[];
  maxStatistic?: number[];
  maxClusterMass?: number[];
  nullSd?: number[];
  parts?: Record<string, Float32Array>;
}

/** Maps with the numbers that matter to a test; the others fit and say nothing. */
export function plainMaps(permutations: number, given: PlainMaps): ClaimMaps {
  const flat = (value: number) => new Array<number>(given.z.length).fill(value);
  const many = (value: number) => new Array<number>(permutations).fill(value);
  return {
    observedA: Float32Array.from(flat(0.5)),
    observedB: Float32Array.from(flat(0.25)),
    lagA: Float32Array.from(flat(0.1)),
    lagB: Float32Array.from(flat(-0.1)),
    nullSd: Float32Array.from(given.nullSd ?? flat(0.05)),
    z: Float32Array.from(given.z),
    upper: Uint32Array.from(given.upper ?? flat(permutations)),
    lower: Uint32Array.from(given.lower ?? flat(permutations)),
    maxStatistic: Float32Array.from(given.maxStatistic ?? many(0)),
    maxClusterMass: Float32Array.from(given.maxClusterMass ?? many(0)),
    parts: given.parts ?? {},
  };
}

export function evidenceOf(
  axes: Axes,
  maps: ClaimMaps,
  test: Partial<Pick<Plan['test'], 'tail' | 'alpha' | 'clusterFormingZ'>> = {},
): Evidence {
  const { tail = 'two-sided', alpha = 0.05, clusterFormingZ = 2 } = test;
  const permutations = maps.maxStatistic.length;
  return {
    axes,
    maps,
    tail,
    alpha,
    clusterFormingZ,
    permutations,
    p: Float64Array.from(maps.z, (_, x) =>
      tailP(tailExceedances(maps.upper[x], maps.lower[x], tail), permutations, tail),
    ),
    clusters: observedClusters(axes, maps, tail, clusterFormingZ),
  };
}
