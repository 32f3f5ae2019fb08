import { histogramBins, type Axes, type RunMaps } from '$engine';
import type { NpyDtype } from '$workers/engine/npy';

interface MapKind {
  dtype: NpyDtype;
  /** Features are [pair][frequency][time]; a histogram adds [bin]; phases are [site][epoch][f][t]. */
  axes: 'feature' | 'feature-bins' | 'phases';
}

const feature = (dtype: NpyDtype): MapKind => ({ dtype, axes: 'feature' });

/** The maps a browser sends, by the name they are kept under. */
export const sentMaps = {
  'observed-a': feature('<f4'),
  'observed-b': feature('<f4'),
  'lag-a': feature('<f4'),
  'lag-b': feature('<f4'),
  'null-mean': feature('<f4'),
  'null-sd': feature('<f4'),
  z: feature('<f4'),
  upper: feature('<u4'),
  lower: feature('<u4'),
  'null-histogram': { dtype: '<u2', axes: 'feature-bins' },
  phases: { dtype: '|u1', axes: 'phases' },
} as const satisfies Record<string, MapKind>;

export type SentMapName = keyof typeof sentMaps;
export const sentMapNames = Object.keys(sentMaps) as SentMapName[];
export const isSentMapName = (name: string): name is SentMapName => Object.hasOwn(sentMaps, name);

/** The field of the engine's maps that stands behind a name; phases are a thing of their own. */
export const mapField = {
  'observed-a': 'observedA',
  'observed-b': 'observedB',
  'lag-a': 'lagA',
  'lag-b': 'lagB',
  'null-mean': 'nullMean',
  'null-sd': 'nullSd',
  z: 'z',
  upper: 'upper',
  lower: 'lower',
  'null-histogram': 'histogram',
} as const satisfies Record<Exclude<SentMapName, 'phases'>, keyof RunMaps>;

/** The shape a map must have; `epochCount` matters to the phases only. */
export function mapShape(name: SentMapName, axes: Axes, epochCount: number): number[] {
  const point = [axes.frequenciesHz.length, axes.timesS.length];
  switch (sentMaps[name].axes) {
    case 'feature':
      return [axes.pairs.length, ...point];
    case 'feature-bins':
      return [axes.pairs.length, ...point, histogramBins.count];
    case 'phases':
      return [axes.sites.length, epochCount, ...point];
  }
}
