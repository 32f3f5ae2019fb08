/** Twin: ../cross-lanes.ts. Eight features of every epoch: re 0..7, im 0..7. */
export function crossLanes(
  j: usize,
  k: usize,
  terms: usize,
  epochCount: i32,
  samplesPerEpoch: i32,
  first: i32,
  count: i32,
): void {
  const part = (<usize>samplesPerEpoch) << 2;
  const stride = part << 1;
  let a = j + ((<usize>first) << 2);
  let b = k + ((<usize>first) << 2);
  if (count < 8) {
    for (let n = 0; n < epochCount; n++, a += stride, b += stride, terms += 64) {
      for (let lane = 0; lane < 8; lane++) {
        const at = (<usize>min(lane, count - 1)) << 2;
        const x = load<f32>(a + at);
        const y = load<f32>(a + part + at);
        const u = load<f32>(b + at);
        const v = load<f32>(b + part + at);
        const out = terms + ((<usize>lane) << 2);
        store<f32>(out, x * u + y * v);
        store<f32>(out, y * u - x * v, 32);
      }
    }
    return;
  }
  for (let n = 0; n < epochCount; n++, a += stride, b += stride, terms += 64) {
    let x = v128.load(a);
    let y = v128.load(a + part);
    let u = v128.load(b);
    let v = v128.load(b + part);
    v128.store(terms, f32x4.add(f32x4.mul(x, u), f32x4.mul(y, v)));
    v128.store(terms, f32x4.sub(f32x4.mul(y, u), f32x4.mul(x, v)), 32);
    x = v128.load(a, 16);
    y = v128.load(a + part, 16);
    u = v128.load(b, 16);
    v = v128.load(b + part, 16);
    v128.store(terms, f32x4.add(f32x4.mul(x, u), f32x4.mul(y, v)), 16);
    v128.store(terms, f32x4.sub(f32x4.mul(y, u), f32x4.mul(x, v)), 48);
  }
}

/** Twin: ../cross-lanes.ts. Sixteen f64 sums of f32 lanes. */
export function sumLanes(terms: usize, sums: usize, from: i32, to: i32): void {
  for (let v: usize = 0; v < 64; v += 16) {
    let low = f64x2.splat(0);
    let high = f64x2.splat(0);
    let at = terms + ((<usize>from) << 6) + v;
    const end = terms + ((<usize>to) << 6) + v;
    for (; at < end; at += 64) {
      const x = v128.load(at);
      low = f64x2.add(low, f64x2.promote_low_f32x4(x));
      high = f64x2.add(high, f64x2.promote_low_f32x4(v128.shuffle<i32>(x, x, 2, 3, 2, 3)));
    }
    v128.store(sums + (v << 1), low);
    v128.store(sums + (v << 1), high, 16);
  }
}

/** Twin: ../cross-lanes.ts. */
export function siteLanes(
  phasors: usize,
  lanes: usize,
  epochCount: i32,
  samplesPerEpoch: i32,
  first: i32,
  count: i32,
): void {
  const part = (<usize>samplesPerEpoch) << 2;
  let re = phasors + ((<usize>first) << 2);
  for (let n = 0; n < epochCount; n++, re += part << 1, lanes += 64) {
    const im = re + part;
    if (count === 8) {
      v128.store(lanes, v128.load(re));
      v128.store(lanes, v128.load(re, 16), 16);
      v128.store(lanes, v128.load(im), 32);
      v128.store(lanes, v128.load(im, 16), 48);
      continue;
    }
    for (let lane = 0; lane < 8; lane++) {
      const at = (<usize>min(lane, count - 1)) << 2;
      const out = lanes + ((<usize>lane) << 2);
      store<f32>(out, load<f32>(re + at));
      store<f32>(out, load<f32>(im + at), 32);
    }
  }
}
