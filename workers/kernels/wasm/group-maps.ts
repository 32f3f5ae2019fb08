/** Numbers from here on have a spacing of 1: added to a small whole number, its bits are the low ones. */
const wholeNumbers: f32 = 8388608;

function standardise(x: v128, center: v128, inverse: v128, rest: v128): v128 {
  return f32x4.sub(f32x4.mul(f32x4.sub(x, center), inverse), rest);
}

/** Twin: ../group-maps.ts. */
export function standardiseGroup(
  values: usize,
  center: usize,
  inverse: usize,
  rest: usize,
  z: usize,
  rows: i32,
): void {
  for (let half: usize = 0; half < 32; half += 16) {
    const c = v128.load(center + half);
    const i = v128.load(inverse + half);
    const r = v128.load(rest + half);
    const end = values + ((<usize>rows) << 5) + half;
    let to = z + half;
    for (let from = values + half; from < end; from += 32, to += 32) {
      v128.store(to, standardise(v128.load(from), c, i, r));
    }
  }
}

/** Bins as whole numbers in the low half of each lane. */
function binsOf(z: v128, perUnit: v128, offset: v128, last: v128): v128 {
  const bin = f32x4.add(f32x4.floor(f32x4.mul(z, perUnit)), offset);
  const inside = f32x4.pmin(f32x4.pmax(bin, f32x4.splat(0)), last);
  return v128.and(f32x4.add(inside, f32x4.splat(wholeNumbers)), i32x4.splat(0xffff));
}

function add(slot: usize): void {
  store<u16>(slot, load<u16>(slot) + 1);
}

/** Counts four features' values; their bins are in 16-bit pieces of a word. */
function count(histogram: usize, bins: u64, step: usize): void {
  const low = <u32>bins;
  const high = <u32>(bins >> 32);
  add(histogram + (((<usize>low) & 0xffff) << 1));
  add(histogram + step + ((<usize>(low >> 16)) << 1));
  add(histogram + 2 * step + (((<usize>high) & 0xffff) << 1));
  add(histogram + 3 * step + ((<usize>(high >> 16)) << 1));
}

/** The same where a bin may be full. */
function countToFull(histogram: usize, bins: u64, step: usize): void {
  for (let x = 0; x < 4; x++, histogram += step, bins >>= 16) {
    const slot = histogram + (((<usize>bins) & 0xffff) << 1);
    const held = <u32>load<u16>(slot);
    store<u16>(slot, <u16>(held + <u32>(held < 65535)));
  }
}

/** The z of one row's eight features, while they are picked from. */
const eightZ = memory.data(32, 16);

/** Appends marked z: positive ones from the front of the row, negative ones from its end. */
function append(row: usize, counts: usize, bytes: usize, marks: i32): void {
  let up = marks & 0xff;
  if (up) {
    let count = <usize>load<u32>(counts);
    for (; up; up &= up - 1, count++) {
      store<f32>(row + (count << 2), load<f32>(eightZ + ((<usize>ctz(up)) << 2)));
    }
    store<u32>(counts, <u32>count);
  }
  let down = marks >> 8;
  if (down) {
    let count = <usize>load<u32>(counts, 4);
    for (; down; down &= down - 1, count++) {
      store<f32>(row + bytes - 4 - (count << 2), load<f32>(eightZ + ((<usize>ctz(down)) << 2)));
    }
    store<u32>(counts, <u32>count, 4);
  }
}

/** Twin: ../group-maps.ts. */
export function addGroupMaps(
  values: usize,
  center: usize,
  inverse: usize,
  rest: usize,
  beyond: usize,
  counts: usize,
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
  binOffset: f32,
  mayFill: i32,
): void {
  const c0 = v128.load(center);
  const c1 = v128.load(center, 16);
  const i0 = v128.load(inverse);
  const i1 = v128.load(inverse, 16);
  const r0 = v128.load(rest);
  const r1 = v128.load(rest, 16);
  const above = f32x4.splat(formingZ);
  const below = f32x4.splat(-formingZ);
  const keep = ((1 << features) - 1) * 0x101;
  const beyondBytes = (<usize>stride) << 2;
  const perUnit = f32x4.splat(binsPerUnit);
  const offset = f32x4.splat(binOffset);
  const last = f32x4.splat(<f32>(binCount - 1));
  // |z| clears the sign bit, -z flips it, z leaves it.
  const clear = i32x4.splat(tailSign === 0 ? 0x7fffffff : -1);
  const flip = i32x4.splat(tailSign < 0 ? <i32>0x80000000 : 0);
  const h = (<usize>binCount) << 1;
  const end = values + ((<usize>rows) << 5);
  for (; values < end; values += 32) {
    const a = standardise(v128.load(values), c0, i0, r0);
    const b = standardise(v128.load(values, 16), c1, i1, r1);
    const up = i16x8.narrow_i32x4_s(f32x4.gt(a, above), f32x4.gt(b, above));
    const down = i16x8.narrow_i32x4_s(f32x4.lt(a, below), f32x4.lt(b, below));
    const marks = i8x16.bitmask(i8x16.narrow_i16x8_s(up, down)) & keep;
    store<u8>(positive, <u8>marks);
    store<u8>(negative, <u8>(marks >> 8));
    if (marks) {
      v128.store(eightZ, a);
      v128.store(eightZ, b, 16);
      append(beyond, counts, beyondBytes, marks);
    }
    const sa = v128.xor(v128.and(a, clear), flip);
    const sb = v128.xor(v128.and(b, clear), flip);
    v128.store(best, f32x4.pmax(v128.load(best), f32x4.pmax(sa, sb)));
    const eight = i16x8.narrow_i32x4_s(
      binsOf(a, perUnit, offset, last),
      binsOf(b, perUnit, offset, last),
    );
    const low = <u64>i64x2.extract_lane(eight, 0);
    const high = <u64>i64x2.extract_lane(eight, 1);
    if (mayFill) {
      countToFull(histogram, low, h);
      countToFull(histogram + 4 * h, high, h);
    } else {
      count(histogram, low, h);
      count(histogram + 4 * h, high, h);
    }
    beyond += beyondBytes;
    counts += 8;
    positive += <usize>bitStride;
    negative += <usize>bitStride;
    best += 16;
  }
}
