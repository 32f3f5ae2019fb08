import { withKernels } from '../kernels';
import { groupFeatures } from '../kernels/group';
import { standardised } from '../kernels/group-maps';
import { tailSign } from './correct/tail';
import type { RunCounts } from './digest';
import { histogramBins } from './histogram';
import { PairNull, type NullSettings } from './null/pair-null';
import { nullModelOf } from './null/registry';
import { newBlock } from './pair-block';
import { partsWork } from './parts-work';
import type { Plan } from './plan';
import { runInput } from './run-input';
import type { Axes, PairBlock } from './types';

/** Unit phasors of all kept epochs, laid out as phase/layout.ts says. */
export interface PhaseData extends RunCounts {
  buffer: ArrayBufferLike;
}

/** All permutations' draws, laid out as the null model says. */
export interface DrawData {
  buffer: ArrayBufferLike;
}

/**
 * Observed maps, null moments, z, exceedance counts, null histograms and the maxima over features,
 * of pairs `range.from .. range.to - 1` under all permutations of the plan.
 *
 * A pair's numbers depend on that pair alone: not on the block it is computed in. One pair's null
 * maps are kept while it is computed, then dropped. A feature whose null has no spread gets
 * z = 0 and counts that give p = 1.
 * @param onPair hears how many pairs of the range are done
 * @throws RangeError when the range, the epochs or a buffer do not fit the plan
 * Source: Phipson and Smyth 2010 (counts), Westfall and Young 1993 (maximum), Maris and Oostenveld
 * 2007 (cluster mass).
 */
export function computePairs(
  plan: Plan,
  axes: Axes,
  range: { from: number; to: number },
  phases: PhaseData,
  draws: DrawData,
  onPair: (pairsDone: number) => void = () => undefined,
): PairBlock {
  if (!(range.from >= 0 && range.from < range.to && range.to <= axes.pairs.length)) {
    throw new RangeError(
      `computePairs: range ${range.from} to ${range.to} leaves the plan's ${axes.pairs.length} pairs`,
    );
  }
  const run = runInput(plan, axes, phases, draws);
  const block = newBlock(axes, range, plan.test.permutations);
  withKernels((kernels) => {
    const parts = partsWork(plan, axes, run.featureCount);
    const settings = { ...nullSettings(plan, axes), ...parts.visitor };
    const nulls = new PairNull(nullModelOf(plan.null), run, kernels, settings);
    for (let pair = range.from; pair < range.to; pair++) {
      const [j, k] = axes.pairs[pair];
      parts.begin(pair, nulls);
      nulls.add(j, k);
      storePair(nulls, pairPart(block, pair - range.from, run.featureCount));
      onPair(pair - range.from + 1);
    }
    storeMaxima(nulls, block);
    block.parts = parts.finish();
  });
  return block;
}

/** Copies what was worked out for a pair to its rows of the block. */
function storePair({ a, b, observed, groups, histogram }: PairNull, part: PairPart): void {
  part.observedA.set(a.value);
  part.observedB.set(b.value);
  part.lagA.set(a.lagRad);
  part.lagB.set(b.lagRad);
  part.histogram.set(histogram.subarray(0, part.histogram.length));
  for (let x = 0; x < part.z.length; x++) {
    const state = groups[Math.floor(x / groupFeatures)];
    const lane = x % groupFeatures;
    part.nullMean[x] = state.mean[lane];
    part.nullSd[x] = state.sd[lane];
    part.upper[x] = state.upper[lane];
    part.lower[x] = state.lower[lane];
    part.z[x] = standardised(observed[x], state.map, lane);
  }
}

function storeMaxima({ best, masses }: PairNull, block: PairBlock): void {
  block.maxClusterMass.set(masses);
  for (let p = 0; p < masses.length; p++) {
    block.maxStatistic[p] = Math.max(...best.subarray(4 * p, 4 * p + 4));
  }
}

function nullSettings(plan: Plan, axes: Axes): NullSettings {
  return {
    frequencyCount: axes.frequenciesHz.length,
    timeCount: axes.timesS.length,
    tailSign: tailSign(plan.test.tail),
    clusterFormingZ: plan.test.clusterFormingZ,
    binCount: histogramBins.count,
    binsPerUnit: 1 / histogramBins.width,
    binOffset: -histogramBins.from / histogramBins.width,
  };
}

type PairPart = Omit<
  PairBlock,
  'firstPair' | 'pairCount' | 'maxStatistic' | 'maxClusterMass' | 'parts'
>;

/** Views of one pair's rows of a block. */
function pairPart(block: PairBlock, index: number, featureCount: number): PairPart {
  const from = index * featureCount;
  const to = from + featureCount;
  const bins = histogramBins.count;
  return {
    observedA: block.observedA.subarray(from, to),
    observedB: block.observedB.subarray(from, to),
    lagA: block.lagA.subarray(from, to),
    lagB: block.lagB.subarray(from, to),
    nullMean: block.nullMean.subarray(from, to),
    nullSd: block.nullSd.subarray(from, to),
    z: block.z.subarray(from, to),
    upper: block.upper.subarray(from, to),
    lower: block.lower.subarray(from, to),
    histogram: block.histogram.subarray(from * bins, to * bins),
  };
}
