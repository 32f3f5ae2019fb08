import type { Cluster } from '$engine';
import { originFields, type TableOrigin } from './edge-table';
import type { ResultAxes } from './result';
import { describedColumns, exportCautions, tsvTable, type TableColumn } from './result-table';

/** A cluster with its number within the run, 1 the largest mass. */
export type NumberedCluster = Cluster & { number: number };

const site = (end: 0 | 1) => (cluster: NumberedCluster, axes: ResultAxes) =>
  axes.sites[axes.pairs[cluster.pair]![end]]!;

/** Lowest or highest value of an axis that the cluster reaches; points are f * timeCount + t. */
const extent =
  (axis: 'frequenciesHz' | 'timesS', end: 'least' | 'most') =>
  ({ points }: NumberedCluster, axes: ResultAxes): number => {
    const timeCount = axes.timesS.length;
    const at = points.map((point) =>
      axis === 'timesS' ? point % timeCount : Math.floor(point / timeCount),
    );
    const index = at.reduce((a, b) => (end === 'least' ? Math.min(a, b) : Math.max(a, b)));
    return axes[axis][index]!;
  };

/** The columns of the exported cluster table, in order. */
export const clusterColumns: TableColumn<NumberedCluster>[] = [
  {
    name: 'cluster',
    description: 'Number of the cluster within the run, 1 the largest mass.',
    value: (cluster) => cluster.number,
  },
  { name: 'site_1', description: 'First site of the pair.', value: site(0) },
  { name: 'site_2', description: 'Second site of the pair.', value: site(1) },
  {
    name: 'sign',
    description: '1 where A synchronises more than B, -1 where less.',
    value: (cluster) => cluster.sign,
  },
  {
    name: 'mass',
    description: 'Sum of |z| over the points of the cluster.',
    value: (cluster) => cluster.mass,
  },
  {
    name: 'size',
    description: 'Points of the frequency-by-time grid in the cluster.',
    value: (cluster) => cluster.size,
  },
  {
    name: 'frequency_from_hz',
    description: 'Lowest frequency of its points.',
    units: 'Hz',
    value: extent('frequenciesHz', 'least'),
  },
  {
    name: 'frequency_to_hz',
    description: 'Highest frequency of its points.',
    units: 'Hz',
    value: extent('frequenciesHz', 'most'),
  },
  {
    name: 'time_from_s',
    description: 'First time of its points, from the event.',
    units: 's',
    value: extent('timesS', 'least'),
  },
  {
    name: 'time_to_s',
    description: 'Last time of its points, from the event.',
    units: 's',
    value: extent('timesS', 'most'),
  },
  {
    name: 'exceedances',
    description: 'Permutations whose largest mass over all pairs and signs is at least this mass.',
    value: (cluster) => cluster.exceedances,
  },
  {
    name: 'p',
    description: '(exceedances + 1) / (permutations + 1), family-wise.',
    value: (cluster) => cluster.p,
  },
];

export const clustersTsv = (clusters: readonly Cluster[], axes: ResultAxes): string =>
  tsvTable(
    clusterColumns,
    clusters.map((cluster, i) => ({ ...cluster, number: i + 1 })),
    axes,
  );

/** The sidecar of clustersTsv. */
export function clustersSidecar(origin: TableOrigin, count: number): Record<string, unknown> {
  return {
    ...originFields(origin),
    ClusterFormingZ: origin.plan.test.clusterFormingZ,
    Clusters: count,
    MissingValue: 'n/a',
    Cautions: exportCautions('cluster-mass', origin.plan),
    Columns: describedColumns(clusterColumns),
  };
}
