import { measureOf, type MeasureId } from '$engine';
import { claimedLagRad, isNearZeroLag, lagMs } from '$lib/result/zero-lag';
import type { ResultAxes, ResultEdge } from './result';
import type { TableColumn } from './result-table';

export type EdgeColumn = TableColumn<ResultEdge>;

const site = (end: 0 | 1) => (edge: ResultEdge, axes: ResultAxes) =>
  axes.sites[axes.pairs[edge.pair]![end]]!;

const interval95 = '95 % Clopper-Pearson interval for the Monte Carlo error';

/** What the columns of observed values are called: ispc_a, phase_lag_index_a. */
const columnName = (measure: MeasureId) => measure.replaceAll('-', '_');

function observedColumns(measure: MeasureId): EdgeColumn[] {
  const { name, range } = measureOf(measure);
  const [a, b] = ['a', 'b'].map((condition) => `${columnName(measure)}_${condition}`);
  const describe = (condition: string) =>
    `${name} over the epochs of ${condition} at the peak, ${range[0]} to ${range[1]}.`;
  return [
    { name: a!, description: describe('A'), value: (edge) => edge.observedA },
    { name: b!, description: describe('B'), value: (edge) => edge.observedB },
    {
      name: 'difference',
      description: `${a} minus ${b}.`,
      value: (edge) => edge.difference,
    },
  ];
}

const placeColumns: EdgeColumn[] = [
  { name: 'site_1', description: 'First site of the pair.', value: site(0) },
  { name: 'site_2', description: 'Second site of the pair.', value: site(1) },
  {
    name: 'frequency_from_hz',
    description: 'Lowest frequency of the claimed region.',
    units: 'Hz',
    value: (edge) => edge.fromHz,
  },
  {
    name: 'frequency_to_hz',
    description: 'Highest frequency of the claimed region.',
    units: 'Hz',
    value: (edge) => edge.toHz,
  },
  {
    name: 'time_from_s',
    description: 'First time of the claimed region, from the event.',
    units: 's',
    value: (edge) => edge.fromS,
  },
  {
    name: 'time_to_s',
    description: 'Last time of the claimed region, from the event.',
    units: 's',
    value: (edge) => edge.toS,
  },
  {
    name: 'peak_frequency_hz',
    description: 'Frequency of the largest |z| of the region.',
    units: 'Hz',
    value: (edge) => edge.peakHz,
  },
  {
    name: 'peak_time_s',
    description: 'Time of the largest |z| of the region, from the event.',
    units: 's',
    value: (edge) => edge.peakS,
  },
  {
    name: 'point_count',
    description: 'Points of the frequency-by-time grid in the region.',
    value: (edge) => edge.points,
  },
];

const claimColumns: EdgeColumn[] = [
  {
    name: 'z',
    description: "The peak's statistic in standard deviations of its own null distribution.",
    value: (edge) => edge.z,
  },
  {
    name: 'p',
    description: 'Uncorrected p at the peak, (b + 1) / (m + 1).',
    value: (edge) => edge.p,
  },
  { name: 'p_low', description: `Lower end of p's ${interval95}.`, value: (edge) => edge.pLow },
  { name: 'p_high', description: `Upper end of p's ${interval95}.`, value: (edge) => edge.pHigh },
  {
    name: 'adjusted_p',
    description: 'p under the correction that the sidecar names.',
    value: (edge) => edge.adjustedP,
  },
  {
    name: 'adjusted_p_low',
    description: `Lower end of adjusted_p's ${interval95}; n/a where it is no single proportion.`,
    value: (edge) => edge.adjustedPLow,
  },
  {
    name: 'adjusted_p_high',
    description: `Upper end of adjusted_p's ${interval95}; n/a where it is no single proportion.`,
    value: (edge) => edge.adjustedPHigh,
  },
  {
    name: 'lag_a_rad',
    description: 'Preferred phase difference site_1 minus site_2 in A at the peak.',
    units: 'rad',
    value: (edge) => edge.lagARad,
  },
  {
    name: 'lag_b_rad',
    description: 'Preferred phase difference site_1 minus site_2 in B at the peak.',
    units: 'rad',
    value: (edge) => edge.lagBRad,
  },
  {
    name: 'lag_a_ms',
    description: 'lag_a_rad as time at the peak frequency.',
    units: 'ms',
    value: (edge) => lagMs(edge.lagARad, edge.peakHz),
  },
  {
    name: 'lag_b_ms',
    description: 'lag_b_rad as time at the peak frequency.',
    units: 'ms',
    value: (edge) => lagMs(edge.lagBRad, edge.peakHz),
  },
  {
    name: 'lag_near_zero',
    description:
      'true where the lag of the condition with more synchrony lies within 15 degrees of zero or half a turn, as volume conduction and a shared reference make it.',
    value: (edge) => String(isNearZeroLag(claimedLagRad(edge))),
  },
  {
    name: 'cluster',
    description: 'Number of the cluster within the run, 1 the largest mass; n/a without clusters.',
    value: (edge) => edge.cluster,
  },
];

/** The columns of the exported edge table, in order; the sidecar describes each by its name. */
export function edgeColumns(measure: MeasureId): EdgeColumn[] {
  return [...placeColumns, ...observedColumns(measure), ...claimColumns];
}
