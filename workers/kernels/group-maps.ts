import { groupFeatures } from './group';

/**
 * What turns values of eight features into z in f32: `(value - center) * inverse - rest`, where
 * center is the mean rounded to f32 and rest makes up for that; all 0 for a null without spread.
 */
export interface MapScale {
  center: Float32Array;
  inverse: Float32Array;
  rest: Float32Array;
}

/** A value in units of its null: what z means everywhere. Each step is rounded to f32. */
export function standardised(value: number, scale: MapScale, x: number): number {
  const { fround } = Math;
  const away = fround(value - scale.center[x]);
  return fround(fround(away * scale.inverse[x]) - scale.rest[x]);
}

/**
 * The z of eight features' surrogates, for whoever needs whole maps. Layout: `values` and `z`
 * `[row * 8 + feature]`. Overwrites `z`; allocates nothing.
 */
export function standardiseGroup(
  values: Float32Array,
  scale: MapScale,
  z: Float32Array,
  rows: number,
): void {
  for (let at = 0; at < rows * groupFeatures; at++) {
    z[at] = standardised(values[at], scale, at % groupFeatures);
  }
}

/** Null maps of one pair, row after row, that groups of features write their part of. */
export interface NullMapRows {
  /**
   * The z beyond the forming threshold, in order of feature: positive ones from the front of a row,
   * `[row * stride + i]`, negative ones from its end backwards.
   */
  beyond: Float32Array;
  /** How many of them there are so far: `[row * 2]` positive, `[row * 2 + 1]` negative. */
  counts: Uint32Array;
  /** Bit x of a row says whether z is beyond the forming threshold: `[row * bitStride + byte]`. */
  positive: Uint8Array;
  negative: Uint8Array;
  /** `best[row * 4 + lane]`, largest tail statistic so far over pairs and a quarter of the lanes. */
  best: Float32Array;
}

export interface NullMapShape {
  /** Elements of `beyond` from one row to the next: all features, in whole groups. */
  stride: number;
  /** Bytes of bits from one row to the next, a multiple of 8. */
  bitStride: number;
  clusterFormingZ: number;
  /** 0 two-sided, 1 for A greater, -1 for B greater. */
  tailSign: -1 | 0 | 1;
  binCount: number;
  /** Bins to a unit of z, and the bin that begins at z = 0; both whole, so that no bin rounds. */
  binsPerUnit: number;
  binOffset: number;
  /** Permutations of the whole null: more than 65535 may fill a bin. */
  permutations: number;
}

/**
 * Turns surrogates of eight features into z, marks what is beyond the forming threshold, keeps the
 * largest tail statistic, and counts z into each feature's histogram.
 * Layout: `values[row * 8 + feature]`, `histogram[feature * binCount + bin]`, kept at 65535 when
 * full; out see `NullMapRows`, whose arrays begin
 * at the row, and bits at the group's byte. Groups of a row come in order of feature.
 * Features from `group.features` on repeat another one and are left out of bits; their histograms
 * are scratch. Mutates all of `out` and `histogram`; allocates nothing. z errs by less than 3e-7 of
 * itself.
 * Source: maximum statistic, Westfall and Young 1993.
 */
export function addGroupMaps(
  values: Float32Array,
  scale: MapScale,
  out: NullMapRows,
  histogram: Uint16Array,
  group: { rows: number; features: number; shape: NullMapShape },
): void {
  const { rows, features, shape } = group;
  const { stride, bitStride, clusterFormingZ, tailSign } = shape;
  const { binCount, binsPerUnit, binOffset } = shape;
  const forming = Math.fround(clusterFormingZ);
  for (let row = 0; row < rows; row++) {
    let positive = 0;
    let negative = 0;
    for (let x = 0; x < groupFeatures; x++) {
      const z = standardised(values[row * groupFeatures + x], scale, x);
      if (x < features && z > forming) {
        positive |= 1 << x;
        out.beyond[row * stride + out.counts[2 * row]++] = z;
      }
      if (x < features && z < -forming) {
        negative |= 1 << x;
        out.beyond[(row + 1) * stride - 1 - out.counts[2 * row + 1]++] = z;
      }
      const statistic = tailSign === 0 ? Math.abs(z) : tailSign * z;
      const best = row * 4 + (x & 3);
      if (statistic > out.best[best]) out.best[best] = statistic;
      const bin = Math.floor(z * binsPerUnit) + binOffset;
      const slot = x * binCount + Math.min(binCount - 1, Math.max(0, bin));
      if (histogram[slot] < 65_535) histogram[slot]++;
    }
    out.positive[row * bitStride] = positive;
    out.negative[row * bitStride] = negative;
  }
}
