import { groupFeatures } from './group';
import type { GroupScale } from './standardised-differences';

/** Null maps of one pair, row after row, that groups of features write their part of. */
export interface NullMapRows {
  /** `z[row * stride + feature]`. */
  z: Float32Array;
  /** Bit x of a row says whether z is beyond the forming threshold: `[row * bitStride + byte]`. */
  positive: Uint8Array;
  negative: Uint8Array;
  /** `best[row * 4 + lane]`, largest tail statistic so far over pairs and a quarter of the lanes. */
  best: Float32Array;
}

export interface NullMapShape {
  /** Elements of z from one row to the next: whole groups. */
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
}

/**
 * Turns surrogates of eight features into z, marks what is beyond the forming threshold, keeps the
 * largest tail statistic, and counts z into each feature's histogram.
 * Layout: `values[row * 8 + feature]`, `histogram[feature * binCount + bin]`, kept at 65535 when
 * full; out see `NullMapRows`, whose arrays begin at the group's feature (z), byte (bits) and row.
 * Features from `group.features` on repeat another one and are left out of bits; their histograms
 * are scratch. Mutates all of `out` and `histogram`; allocates nothing. z is (value - mean) * inverse
 * in f64, rounded once.
 * Source: maximum statistic, Westfall and Young 1993.
 */
export function addGroupMaps(
  values: Float32Array,
  scale: GroupScale,
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
      const away = values[row * groupFeatures + x] - scale.mean[x];
      const z = Math.fround(away * scale.inverse[x]);
      out.z[row * stride + x] = z;
      if (x < features && z > forming) positive |= 1 << x;
      if (x < features && z < -forming) negative |= 1 << x;
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
