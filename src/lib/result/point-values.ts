import { histogramBins, tailExceedances, tailPWithInterval, type Plan } from '$engine';
import type { Bin } from '$lib/figures/bins';
import type { PairSlices } from './slices';

/** What is known of one pair at one point. */
export interface PointValues {
  z: number;
  observedA: number;
  observedB: number;
  difference: number;
  nullMean: number;
  nullSd: number;
  adjustedP: number;
  p: number;
  pLow: number;
  pHigh: number;
  /** Surrogates at least as extreme, by the plan's tail. */
  exceedances: number;
  /** The statistic whose null the histogram shows. */
  statistic: number;
  bins: Bin[];
}

export function pointValues(
  slices: PairSlices,
  point: number,
  test: Pick<Plan['test'], 'tail' | 'permutations'>,
): PointValues {
  const nullMean = slices.nullMean[point]!;
  const nullSd = slices.nullSd[point]!;
  const z = slices.z[point]!;
  const exceedances = tailExceedances(slices.upper[point]!, slices.lower[point]!, test.tail);
  const { p, interval } = tailPWithInterval(exceedances, test.permutations, test.tail);
  const observedA = slices.observedA[point]!;
  const observedB = slices.observedB[point]!;
  return {
    z,
    observedA,
    observedB,
    difference: observedA - observedB,
    nullMean,
    nullSd,
    adjustedP: slices.adjustedP[point]!,
    p,
    pLow: interval[0],
    pHigh: interval[1],
    exceedances,
    statistic: nullMean + z * nullSd,
    bins: storedBins(slices.histogram, point, nullMean, nullSd),
  };
}

function storedBins(
  histogram: Uint16Array,
  point: number,
  nullMean: number,
  nullSd: number,
): Bin[] {
  const { count, from, width } = histogramBins;
  return Array.from({ length: count }, (_, bin) => ({
    from: nullMean + (from + bin * width) * nullSd,
    to: nullMean + (from + (bin + 1) * width) * nullSd,
    count: histogram[point * count + bin]!,
  }));
}
