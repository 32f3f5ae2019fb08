import { planParts } from './correct/plan-parts';
import { histogramBins } from './histogram';
import type { Plan } from './plan';
import type { Axes, PairBlock, RunMaps } from './types';

/** An empty block: zero maps, maxima that anything exceeds. */
export function newBlock(
  axes: Axes,
  range: { from: number; to: number },
  permutations: number,
): PairBlock {
  const pairCount = range.to - range.from;
  const cells = pairCount * axes.frequenciesHz.length * axes.timesS.length;
  return {
    firstPair: range.from,
    pairCount,
    observedA: new Float32Array(cells),
    observedB: new Float32Array(cells),
    lagA: new Float32Array(cells),
    lagB: new Float32Array(cells),
    nullMean: new Float32Array(cells),
    nullSd: new Float32Array(cells),
    z: new Float32Array(cells),
    upper: new Uint32Array(cells),
    lower: new Uint32Array(cells),
    histogram: new Uint16Array(cells * histogramBins.count),
    maxStatistic: new Float32Array(permutations).fill(-Infinity),
    maxClusterMass: new Float32Array(permutations),
    parts: {},
  };
}

const mapNames = [
  'observedA',
  'observedB',
  'lagA',
  'lagB',
  'nullMean',
  'nullSd',
  'z',
  'upper',
  'lower',
  'histogram',
] as const;

/**
 * Puts blocks together, in any order: maps side by side, distributions by their maxima, and the
 * parts of single corrections as these say.
 * @throws RangeError when blocks overlap, leave pairs out, or do not have the plan's shape
 */
export function mergeBlocks(blocks: PairBlock[], axes: Axes, test: Plan['test']): RunMaps {
  const { permutations } = test;
  const pairs = axes.pairs.length;
  const whole = newBlock(axes, { from: 0, to: pairs }, permutations);
  let next = 0;
  for (const block of [...blocks].sort((a, b) => a.firstPair - b.firstPair)) {
    if (block.firstPair !== next) {
      throw new RangeError(
        `mergeBlocks: a block begins at pair ${block.firstPair} where pair ${next} is next`,
      );
    }
    next += block.pairCount;
    if (next > pairs) {
      throw new RangeError(`mergeBlocks: blocks reach pair ${next} of ${pairs}`);
    }
    addBlock(block, whole, axes, permutations);
  }
  if (next !== pairs) throw new RangeError(`mergeBlocks: ${next} of ${pairs} pairs are there`);
  for (const [id, part] of planParts(test)) {
    whole.parts[id] = part.merge(
      blocks.map((block) => shareOf(block, id)),
      { axes, test },
    );
  }
  return whole;
}

function addBlock(block: PairBlock, whole: RunMaps, axes: Axes, permutations: number): void {
  const to = block.firstPair + block.pairCount;
  const empty = newBlock(axes, { from: block.firstPair, to }, permutations);
  for (const name of [...mapNames, 'maxStatistic', 'maxClusterMass'] as const) {
    if (block[name].length !== empty[name].length) {
      throw new RangeError(
        `mergeBlocks: ${name} of the block at pair ${block.firstPair} has ${block[name].length} values where the plan makes ${empty[name].length}`,
      );
    }
  }
  for (const name of mapNames) {
    whole[name].set(block[name], (block[name].length / block.pairCount) * block.firstPair);
  }
  for (let p = 0; p < permutations; p++) {
    whole.maxStatistic[p] = Math.max(whole.maxStatistic[p], block.maxStatistic[p]);
    whole.maxClusterMass[p] = Math.max(whole.maxClusterMass[p], block.maxClusterMass[p]);
  }
}

function shareOf(block: PairBlock, id: string): Float32Array {
  const share = block.parts[id];
  if (share) return share;
  throw new RangeError(
    `mergeBlocks: the block at pair ${block.firstPair} lacks what ${id} needs of it`,
  );
}

/** The merged parts as plain lists, for JSON. */
export function partLists(maps: Pick<RunMaps, 'parts'>): Record<string, number[]> {
  return Object.fromEntries(
    Object.entries(maps.parts).map(([id, values]) => [id, Array.from(values)]),
  );
}
