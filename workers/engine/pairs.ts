import { countExceedances } from '../kernels/exceedances';
import {
  addNullMaps,
  newMapScratch,
  standardised,
  type NullMapScratch,
  type NullMapSettings,
} from '../kernels/null-maps';
import { addToMoments, finishMoments, newNullSums, type NullSums } from '../kernels/null-moments';
import { tailSign } from './correct/tail';
import type { RunCounts } from './digest';
import { histogramBins } from './histogram';
import type { RunInput } from './null/model';
import { newMoments, pairStatistic, type Moments, type PairStatistic } from './null/pair-statistic';
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
  const block = newBlock(axes, range, plan.test.permutations);
  const work = new PairWork(plan, axes, runInput(plan, axes, phases, draws), block);
  for (let pair = range.from; pair < range.to; pair++) {
    work.compute(pair - range.from, axes.pairs[pair]);
    onPair(pair - range.from + 1);
  }
  return block;
}

/** All that one pair needs, made once for a block. */
class PairWork {
  private readonly featureCount: number;
  private readonly observer: Observer;
  private readonly statistic: PairStatistic;
  private readonly a: Observed;
  private readonly b: Observed;
  private readonly observed: Float64Array;
  private readonly sums: NullSums;
  private readonly moments: Moments;
  private readonly settings: NullMapSettings;
  private readonly scratch: NullMapScratch;

  constructor(
    private readonly plan: Plan,
    axes: Axes,
    run: RunInput,
    private readonly block: PairBlock,
  ) {
    this.featureCount = run.featureCount;
    this.observer = observer(run);
    this.statistic = pairStatistic(nullModelOf(plan.null), run);
    this.a = newObserved(run.featureCount);
    this.b = newObserved(run.featureCount);
    this.observed = new Float64Array(run.featureCount);
    this.sums = newNullSums(run.featureCount);
    this.moments = newMoments(run.featureCount);
    this.settings = mapSettings(plan, axes, this.moments);
    this.scratch = newMapScratch(run.featureCount);
  }

  /** Fills one pair of the block. */
  compute(index: number, [j, k]: [number, number]): void {
    const { observed, moments } = this;
    const part = pairPart(this.block, index, this.featureCount);
    this.observer.observe(j, k, 'a', this.a);
    this.observer.observe(j, k, 'b', this.b);
    this.statistic.begin({ j, k }, this.a.value, this.b.value, observed);
    this.summarise(part);
    part.observedA.set(this.a.value);
    part.observedB.set(this.b.value);
    part.lagA.set(this.a.lagRad);
    part.lagB.set(this.b.lagRad);
    part.nullMean.set(moments.mean);
    part.nullSd.set(moments.sd);
    for (let x = 0; x < observed.length; x++) {
      part.z[x] = standardised(observed[x], moments.mean[x], moments.sd[x]);
    }
  }

  /** Two passes over the surrogates: moments and counts, then what needs the moments. */
  private summarise(part: PairPart): void {
    const { surrogates, tolerance } = this.statistic;
    const { featureCount, observed, sums, moments } = this;
    surrogates.statistic((values, _, rows) => {
      const count = rows.to - rows.from;
      addToMoments(values, count, featureCount, sums, rows.from === 0);
      countExceedances(values, count, observed, part, tolerance);
    });
    finishMoments(sums, this.plan.test.permutations, ties.zeroSd, moments.mean, moments.sd);
    surrogates.statistic((values, _, rows) => {
      const tile = { first: rows.from, count: rows.to - rows.from };
      addNullMaps(values, tile, this.settings, part, this.scratch);
    });
  }
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

type PairPart = Omit<PairBlock, 'firstPair' | 'pairCount'>;

/** Views of one pair's rows of a block; the distributions are the block's own. */
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
    maxStatistic: block.maxStatistic,
    maxClusterMass: block.maxClusterMass,
  };
}
