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

/** All blocks' maps side by side, and of each block what single corrections need of it. */
export interface GatheredBlocks {
  maps: RunMaps;
  shares: Pick<PairBlock, 'firstPair' | 'pairCount' | 'parts'>[];
}

/**
 * Takes blocks as they come, in any order, and keeps one set of maps instead of the blocks: maps
 * side by side, distributions by their maxima.
 */
export class BlockGatherer {
  readonly #gathered: GatheredBlocks;
  readonly #axes: Axes;

  constructor(axes: Axes, test: Plan['test']) {
    this.#axes = axes;
    const maps = newBlock(axes, { from: 0, to: axes.pairs.length }, test.permutations);
    this.#gathered = { maps, shares: [] };
  }

  /** @throws RangeError when the block does not have the plan's shape */
  add(block: PairBlock): void {
    const { firstPair, pairCount, parts } = block;
    addBlock(block, this.#gathered.maps, this.#axes);
    this.#gathered.shares.push({ firstPair, pairCount, parts });
  }

  /** @throws RangeError when blocks overlapped, or left pairs out */
  finish(): GatheredBlocks {
    checkCover(this.#gathered.shares, this.#axes.pairs.length);
    return this.#gathered;
  }
}

/** The gathered maps with the parts of single corrections merged as these say. */
export function mergeShares(
  { maps, shares }: GatheredBlocks,
  axes: Axes,
  test: Plan['test'],
): RunMaps {
  for (const [id, part] of planParts(test)) {
    maps.parts[id] = part.merge(
      shares.map((share) => shareOf(share, id)),
      { axes, test },
    );
  }
  return maps;
}

/**
 * Puts blocks together that are all there.
 * @throws RangeError when blocks overlap, leave pairs out, or do not have the plan's shape
 */
export function mergeBlocks(blocks: PairBlock[], axes: Axes, test: Plan['test']): RunMaps {
  const gatherer = new BlockGatherer(axes, test);
  for (const block of blocks) gatherer.add(block);
  return mergeShares(gatherer.finish(), axes, test);
}

function checkCover(blocks: Pick<PairBlock, 'firstPair' | 'pairCount'>[], pairs: number): void {
  let next = 0;
  for (const { firstPair, pairCount } of [...blocks].sort((a, b) => a.firstPair - b.firstPair)) {
    if (firstPair !== next) {
      throw new RangeError(
        `mergeBlocks: a block begins at pair ${firstPair} where pair ${next} is next`,
      );
    }
    next += pairCount;
  }
  if (next !== pairs) throw new RangeError(`mergeBlocks: ${next} of ${pairs} pairs are there`);
}

function addBlock(block: PairBlock, whole: RunMaps, axes: Axes): void {
  const pairs = axes.pairs.length;
  const { firstPair, pairCount } = block;
  if (firstPair + pairCount > pairs) {
    throw new RangeError(`mergeBlocks: blocks reach pair ${firstPair + pairCount} of ${pairs}`);
  }
  const permutations = whole.maxStatistic.length;
  for (const name of [...mapNames, 'maxStatistic', 'maxClusterMass'] as const) {
    const isMap = name !== 'maxStatistic' && name !== 'maxClusterMass';
    const due = isMap ? (whole[name].length / pairs) * pairCount : permutations;
    if (block[name].length !== due) {
      throw new RangeError(
        `mergeBlocks: ${name} of the block at pair ${firstPair} has ${block[name].length} values where the plan makes ${due}`,
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

function shareOf(block: Pick<PairBlock, 'firstPair' | 'parts'>, id: string): Float32Array {
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
