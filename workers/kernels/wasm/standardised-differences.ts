/** Twin: ../standardised-differences.ts. */
export function standardisedDifferences(
  a: usize,
  b: usize,
  meanA: usize,
  inverseA: usize,
  meanB: usize,
  inverseB: usize,
  rows: i32,
): void {
  for (let pair: usize = 0; pair < 4; pair++) {
    const f64s = pair << 4;
    const mA = v128.load(meanA + f64s);
    const iA = v128.load(inverseA + f64s);
    const mB = v128.load(meanB + f64s);
    const iB = v128.load(inverseB + f64s);
    let at = a + (pair << 3);
    let other = b + (pair << 3);
    const end = at + ((<usize>rows) << 5);
    for (; at < end; at += 32, other += 32) {
      const x = f64x2.promote_low_f32x4(v128.load64_zero(at));
      const y = f64x2.promote_low_f32x4(v128.load64_zero(other));
      const zA = f64x2.mul(f64x2.sub(x, mA), iA);
      const zB = f64x2.mul(f64x2.sub(y, mB), iB);
      v128.store64_lane(at, f32x4.demote_f64x2_zero(f64x2.sub(zA, zB)), 0);
    }
  }
}
