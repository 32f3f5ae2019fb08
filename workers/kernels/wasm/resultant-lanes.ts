function lengths(re: v128, im: v128, perEpoch: v128): v128 {
  const size = f32x4.sqrt(f32x4.add(f32x4.mul(re, re), f32x4.mul(im, im)));
  return f32x4.pmin(f32x4.mul(size, perEpoch), f32x4.splat(1));
}

/** Twin: ../resultant-lanes.ts. */
export function resultantDifferences(
  sums: usize,
  total: usize,
  values: usize,
  rows: i32,
  perEpochA: f32,
  perEpochB: f32,
): void {
  const a = f32x4.splat(perEpochA);
  const b = f32x4.splat(perEpochB);
  const re0 = v128.load(total);
  const re1 = v128.load(total, 16);
  const im0 = v128.load(total, 32);
  const im1 = v128.load(total, 48);
  const end = values + ((<usize>rows) << 5);
  for (; values < end; values += 32, sums += 64) {
    let re = v128.load(sums);
    let im = v128.load(sums, 32);
    let ofA = lengths(re, im, a);
    let ofB = lengths(f32x4.sub(re0, re), f32x4.sub(im0, im), b);
    v128.store(values, f32x4.sub(ofA, ofB));
    re = v128.load(sums, 16);
    im = v128.load(sums, 48);
    ofA = lengths(re, im, a);
    ofB = lengths(f32x4.sub(re1, re), f32x4.sub(im1, im), b);
    v128.store(values, f32x4.sub(ofA, ofB), 16);
  }
}

/** Twin: ../resultant-lanes.ts. */
export function resultantsOfLanes(sums: usize, values: usize, rows: i32, perEpoch: f32): void {
  const scale = f32x4.splat(perEpoch);
  const end = values + ((<usize>rows) << 5);
  for (; values < end; values += 32, sums += 64) {
    v128.store(values, lengths(v128.load(sums), v128.load(sums, 32), scale));
    v128.store(values, lengths(v128.load(sums, 16), v128.load(sums, 48), scale), 16);
  }
}
