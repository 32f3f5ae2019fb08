function standardise(x: v128, m0: v128, m1: v128, i0: v128, i1: v128): v128 {
  const low = f64x2.mul(f64x2.sub(f64x2.promote_low_f32x4(x), m0), i0);
  const top = f64x2.promote_low_f32x4(v128.shuffle<i32>(x, x, 2, 3, 2, 3));
  const high = f64x2.mul(f64x2.sub(top, m1), i1);
  return v128.shuffle<i32>(f32x4.demote_f64x2_zero(low), f32x4.demote_f64x2_zero(high), 0, 1, 4, 5);
}

function bins(z: v128, perUnit: v128, offset: v128, last: v128): v128 {
  const bin = i32x4.trunc_sat_f32x4_s(f32x4.floor(f32x4.mul(z, perUnit)));
  return i32x4.min_s(last, i32x4.max_s(i32x4.splat(0), i32x4.add(bin, offset)));
}

function count(histogram: usize, bin: i32): void {
  const slot = histogram + ((<usize>bin) << 1);
  const held = <u32>load<u16>(slot);
  store<u16>(slot, <u16>(held + <u32>(held < 65535)));
}

/** Twin: ../group-maps.ts. */
export function addGroupMaps(
  values: usize,
  mean: usize,
  inverse: usize,
  z: usize,
  positive: usize,
  negative: usize,
  best: usize,
  histogram: usize,
  rows: i32,
  stride: i32,
  bitStride: i32,
  features: i32,
  formingZ: f32,
  tailSign: i32,
  binCount: i32,
  binsPerUnit: f32,
  binOffset: i32,
): void {
  const m0 = v128.load(mean);
  const m1 = v128.load(mean, 16);
  const m2 = v128.load(mean, 32);
  const m3 = v128.load(mean, 48);
  const i0 = v128.load(inverse);
  const i1 = v128.load(inverse, 16);
  const i2 = v128.load(inverse, 32);
  const i3 = v128.load(inverse, 48);
  const above = f32x4.splat(formingZ);
  const below = f32x4.splat(-formingZ);
  const keep = (1 << features) - 1;
  const perUnit = f32x4.splat(binsPerUnit);
  const offset = i32x4.splat(binOffset);
  const last = i32x4.splat(binCount - 1);
  // |z| clears the sign bit, -z flips it, z leaves it.
  const clear = i32x4.splat(tailSign === 0 ? 0x7fffffff : -1);
  const flip = i32x4.splat(tailSign < 0 ? <i32>0x80000000 : 0);
  const h = (<usize>binCount) << 1;
  const zStep = (<usize>stride) << 2;
  const end = values + ((<usize>rows) << 5);
  for (; values < end; values += 32) {
    const a = standardise(v128.load(values), m0, m1, i0, i1);
    const b = standardise(v128.load(values, 16), m2, m3, i2, i3);
    v128.store(z, a);
    v128.store(z, b, 16);
    const up = i32x4.bitmask(f32x4.gt(a, above)) | (i32x4.bitmask(f32x4.gt(b, above)) << 4);
    const down = i32x4.bitmask(f32x4.lt(a, below)) | (i32x4.bitmask(f32x4.lt(b, below)) << 4);
    store<u8>(positive, <u8>(up & keep));
    store<u8>(negative, <u8>(down & keep));
    const sa = v128.xor(v128.and(a, clear), flip);
    const sb = v128.xor(v128.and(b, clear), flip);
    v128.store(best, f32x4.pmax(v128.load(best), f32x4.pmax(sa, sb)));
    const p = bins(a, perUnit, offset, last);
    const q = bins(b, perUnit, offset, last);
    count(histogram, i32x4.extract_lane(p, 0));
    count(histogram + h, i32x4.extract_lane(p, 1));
    count(histogram + 2 * h, i32x4.extract_lane(p, 2));
    count(histogram + 3 * h, i32x4.extract_lane(p, 3));
    count(histogram + 4 * h, i32x4.extract_lane(q, 0));
    count(histogram + 5 * h, i32x4.extract_lane(q, 1));
    count(histogram + 6 * h, i32x4.extract_lane(q, 2));
    count(histogram + 7 * h, i32x4.extract_lane(q, 3));
    z += zStep;
    positive += <usize>bitStride;
    negative += <usize>bitStride;
    best += 16;
  }
}
