import { histogramBins, measureOf, type Axes, type Plan } from '$engine';
import { ResultRefused } from './refused';

/** Room for the rounding of 32-bit numbers at limits that hold exactly for real ones. */
const slack = 1e-5;

/**
 * What the engine's own check of the maps (in `concludeFrom`) leaves open: observed values inside
 * the measure's range, and finite means. @throws ResultRefused naming map, pair, frequency, time.
 */
export function checkMapValues(
  maps: Record<'observed-a' | 'observed-b' | 'null-mean', Float32Array>,
  plan: Plan,
  axes: Axes,
): void {
  const [least, most] = measureOf(plan.measure).range;
  const limits = {
    'observed-a': [least - slack, most + slack],
    'observed-b': [least - slack, most + slack],
    'null-mean': [-Number.MAX_VALUE, Number.MAX_VALUE],
  } as const;
  for (const name of ['observed-a', 'observed-b', 'null-mean'] as const) {
    const [low, high] = limits[name];
    const map = maps[name];
    // Written so that NaN is found too.
    const bad = map.findIndex((value) => !(value >= low && value <= high));
    if (bad < 0) continue;
    const due = name === 'null-mean' ? 'a finite number' : `${least} to ${most}`;
    throw new ResultRefused(
      'map-value',
      `Map ${name} is ${map[bad]} at ${placeOf(bad, axes)}; due is ${due}.`,
    );
  }
}

/** No feature's histogram counts more than there are permutations. */
export function checkHistogram(counts: Uint16Array, permutations: number, axes: Axes): void {
  const bins = histogramBins.count;
  for (let feature = 0; feature * bins < counts.length; feature++) {
    let sum = 0;
    for (let bin = 0; bin < bins; bin++) sum += counts[feature * bins + bin]!;
    if (sum > permutations) {
      throw new ResultRefused(
        'map-value',
        `Map null-histogram counts ${sum} at ${placeOf(feature, axes)}; the plan has ${permutations} permutations.`,
      );
    }
  }
}

function placeOf(feature: number, axes: Axes): string {
  const times = axes.timesS.length;
  const points = axes.frequenciesHz.length * times;
  const [j, k] = axes.pairs[Math.floor(feature / points)]!;
  const hz = axes.frequenciesHz[Math.floor((feature % points) / times)]!;
  return `${axes.sites[j]} and ${axes.sites[k]}, ${hz} Hz, ${axes.timesS[feature % times]} s`;
}
