import { countExceedances } from '../kernels/exceedances';
import { clusterForest } from '../kernels/clusters';
import { addNullMaps, standardised, type NullMapSettings } from '../kernels/null-maps';
import { addToMoments, finishMoments, newNullSums } from '../kernels/null-moments';
import { tailSign } from './correct/tail';
import type { RunCounts } from './digest';
import { histogramBins } from './histogram';
import { newMoments, pairStatistic, type PairStatistic } from './null/pair-statistic';
import { nullModelOf } from './null/registry';
import { observer, type Observed, type Observer } from './observe';
import { newBlock } from './pair-block';
import type { Plan } from './plan';
import { runInput } from './run-input';
import { ties } from './ties';
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
 * A pair's numbers depend on that pair alone: not on the block it is computed in. One pair's
 * surrogates are kept while it is computed, then dropped. A feature whose null has no spread gets
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
  const work = pairWork(
    plan,
    axes,
    observer(run),
    pairStatistic(nullModelOf(plan.null), run),
    block,
  );
  for (let pair = range.from; pair < range.to; pair++) {
    const [j, k] = axes.pairs[pair];
    work(pair - range.from, j, k);
    onPair(pair - range.from + 1);
  }
  return block;
}

/** All that one pair needs, made once for a block: a function that fills one pair of it. */
function pairWork(
  plan: Plan,
  axes: Axes,
  observe: Observer,
  statistic: PairStatistic,
  block: PairBlock,
): (index: number, j: number, k: number) => void {
  const featureCount = axes.frequenciesHz.length * axes.timesS.length;
  const a = newObserved(featureCount);
  const b = newObserved(featureCount);
  const observed = new Float64Array(featureCount);
  const sums = newNullSums(featureCount);
  const moments = newMoments(featureCount);
  const settings = mapSettings(plan, axes, moments);
  const scratch = {
    z: new Float32Array(featureCount),
    positive: new Int32Array(featureCount),
    negative: new Int32Array(featureCount),
    forest: clusterForest(featureCount),
  };
  return (index, j, k) => {
    const part = pairPart(block, index, featureCount);
    observe.observe(j, k, 'a', a);
    observe.observe(j, k, 'b', b);
    statistic.begin({ j, k }, a.value, b.value, observed);
    statistic.surrogates.statistic((values, _, rows) => {
      const count = rows.to - rows.from;
      addToMoments(values, count, featureCount, sums, rows.from === 0);
      countExceedances(values, count, observed, part, statistic.tolerance);
    });
    finishMoments(sums, plan.test.permutations, ties.zeroSd, moments.mean, moments.sd);
    statistic.surrogates.statistic((values, _, rows) => {
      const tile = { first: rows.from, count: rows.to - rows.from };
      addNullMaps(values, tile, settings, part, scratch);
    });
    part.observedA.set(a.value);
    part.observedB.set(b.value);
    part.lagA.set(a.lagRad);
    part.lagB.set(b.lagRad);
    part.nullMean.set(moments.mean);
    part.nullSd.set(moments.sd);
    for (let x = 0; x < featureCount; x++) {
      part.z[x] = standardised(observed[x], moments.mean[x], moments.sd[x]);
    }
  };
}

function newObserved(featureCount: number): Observed {
  return { value: new Float64Array(featureCount), lagRad: new Float64Array(featureCount) };
}

function mapSettings(
  plan: Plan,
  axes: Axes,
  moments: Pick<NullMapSettings, 'mean' | 'sd'>,
): NullMapSettings {
  return {
    featureCount: moments.mean.length,
    timeCount: axes.timesS.length,
    tailSign: tailSign(plan.test.tail),
    clusterFormingZ: plan.test.clusterFormingZ,
    binCount: histogramBins.count,
    binFrom: histogramBins.from,
    binWidth: histogramBins.width,
    mean: moments.mean,
    sd: moments.sd,
  };
}

/** Views of one pair's rows of a block; the distributions are the block's own. */
function pairPart(block: PairBlock, index: number, featureCount: number) {
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
    maxStatistic: block.maxStatistic,
    maxClusterMass: block.maxClusterMass,
  };
}
