import { open } from 'node:fs/promises';
import path from 'node:path';
import { dtypeOf, npyParts, type NpyArray, type NpyDtype } from '$workers/engine/npy';
import type { WholeRun } from '$workers/run/whole-run';

interface NamedMap {
  name: string;
  data: NpyArray;
  meaning: string;
  unit?: string;
}

/** What result.json says of a map's file. */
export interface DescribedMap {
  file: string;
  dtype: NpyDtype;
  shape: number[];
  /** The axis behind each dimension, each stated under `axes` of result.json. */
  axes: string[];
  meaning: string;
  unit?: string;
}

function featureMaps({ maps, outcome }: WholeRun): NamedMap[] {
  const { observedA, observedB } = maps;
  return [
    { name: 'observed-a', data: observedA, meaning: 'the measure in A' },
    { name: 'observed-b', data: observedB, meaning: 'the measure in B' },
    {
      name: 'difference',
      data: observedA.map((value, i) => value - observedB[i]!),
      meaning: 'observed-a minus observed-b',
    },
    {
      name: 'z',
      data: maps.z,
      meaning: 'the statistic in standard deviations of its own null; 0 where that has no spread',
    },
    { name: 'p', data: outcome.p, meaning: "uncorrected p by the plan's tail, (b + 1) / (m + 1)" },
    ...outcome.corrections.map(({ id, adjustedP }) => ({
      name: `adjusted-p-${id}`,
      data: adjustedP,
      meaning: `p under the correction ${id}; 1 where nothing is claimed`,
    })),
    { name: 'null-mean', data: maps.nullMean, meaning: "mean of the statistic's null" },
    { name: 'null-sd', data: maps.nullSd, meaning: "standard deviation of the statistic's null" },
    { name: 'upper', data: maps.upper, meaning: 'permutations at or above the observed statistic' },
    { name: 'lower', data: maps.lower, meaning: 'permutations at or below the observed statistic' },
    { name: 'lag-a', data: maps.lagA, meaning: 'preferred phase difference in A', unit: 'rad' },
    { name: 'lag-b', data: maps.lagB, meaning: 'preferred phase difference in B', unit: 'rad' },
  ];
}

function distributions({ maps }: WholeRun): NamedMap[] {
  return [
    {
      name: 'max-statistic',
      data: maps.maxStatistic,
      meaning: "each permutation's largest statistic over all features, by the plan's tail",
    },
    {
      name: 'cluster-mass',
      data: maps.maxClusterMass,
      meaning: "each permutation's largest cluster mass over all pairs and signs",
    },
  ];
}

/** Writes every map and distribution of a run, and says what each file holds. */
export async function writeMaps(
  folder: string,
  run: WholeRun,
): Promise<Record<string, DescribedMap>> {
  const { pairs, frequenciesHz, timesS } = run.axes;
  const shape = [pairs.length, frequenciesHz.length, timesS.length];
  const described: Record<string, DescribedMap> = {};
  const write = async ({ name, data, ...rest }: NamedMap, shape: number[], axes: string[]) => {
    const file = `${name}.npy`;
    await writeParts(path.join(folder, file), npyParts(data, shape));
    described[name] = { file, dtype: dtypeOf(data), shape, axes, ...rest };
  };
  for (const map of featureMaps(run)) {
    await write(map, shape, ['pairs', 'frequenciesHz', 'timesS']);
  }
  for (const map of distributions(run)) await write(map, [map.data.length], ['permutation']);
  return described;
}

async function writeParts(file: string, parts: Uint8Array[]): Promise<void> {
  const handle = await open(file, 'wx');
  try {
    for (const part of parts) await handle.writeFile(part);
  } finally {
    await handle.close();
  }
}
