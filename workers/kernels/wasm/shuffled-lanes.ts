/**
 * Twin: ../shuffled-lanes.ts. Two rows at once share the load of j's terms.
 */
export function sumShuffledLanes(
  j: usize,
  k: usize,
  order: usize,
  sums: usize,
  rows: i32,
  epochCount: i32,
): void {
  const length = (<usize>epochCount) << 1;
  const jEnd = j + ((<usize>epochCount) << 6);
  for (let row = 0; row < rows; row++) {
    let r0 = f32x4.splat(0);
    let r1 = r0;
    let m0 = r0;
    let m1 = r0;
    for (let at = j; at < jEnd; at += 64, order += 2) {
      const q = k + ((<usize>load<u16>(order)) << 6);
      const a = v128.load(at);
      const b = v128.load(at, 32);
      const c = v128.load(q);
      const d = v128.load(q, 32);
      r0 = f32x4.add(r0, f32x4.add(f32x4.mul(a, c), f32x4.mul(b, d)));
      m0 = f32x4.add(m0, f32x4.sub(f32x4.mul(b, c), f32x4.mul(a, d)));
      const e = v128.load(at, 16);
      const f = v128.load(at, 48);
      const g = v128.load(q, 16);
      const h = v128.load(q, 48);
      r1 = f32x4.add(r1, f32x4.add(f32x4.mul(e, g), f32x4.mul(f, h)));
      m1 = f32x4.add(m1, f32x4.sub(f32x4.mul(f, g), f32x4.mul(e, h)));
    }
    v128.store(sums, r0);
    v128.store(sums, r1, 16);
    v128.store(sums, m0, 32);
    v128.store(sums, m1, 48);
    sums += 64;
  }
}
