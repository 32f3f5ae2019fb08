function high(x: v128): v128 {
  return f64x2.promote_low_f32x4(v128.shuffle<i32>(x, x, 2, 3, 2, 3));
}

/** One vector of four features: sums and squares in f64, counts by comparison. */
function addFour(
  values: usize,
  origin: usize,
  sum: usize,
  squares: usize,
  upperFrom: usize,
  lowerTo: usize,
  upper: usize,
  lower: usize,
  rows: i32,
): void {
  const end = values + ((<usize>rows) << 5);
  const o0 = v128.load(origin);
  const o1 = v128.load(origin, 16);
  const least = v128.load(upperFrom);
  const most = v128.load(lowerTo);
  let s0 = v128.load(sum);
  let s1 = v128.load(sum, 16);
  let q0 = v128.load(squares);
  let q1 = v128.load(squares, 16);
  let above = v128.load(upper);
  let below = v128.load(lower);
  for (; values < end; values += 32) {
    const x = v128.load(values);
    above = i32x4.sub(above, f32x4.ge(x, least));
    below = i32x4.sub(below, f32x4.le(x, most));
    const a = f64x2.sub(f64x2.promote_low_f32x4(x), o0);
    const b = f64x2.sub(high(x), o1);
    s0 = f64x2.add(s0, a);
    s1 = f64x2.add(s1, b);
    q0 = f64x2.add(q0, f64x2.mul(a, a));
    q1 = f64x2.add(q1, f64x2.mul(b, b));
  }
  v128.store(sum, s0);
  v128.store(sum, s1, 16);
  v128.store(squares, q0);
  v128.store(squares, q1, 16);
  v128.store(upper, above);
  v128.store(lower, below);
}

/** Twin: ../group-moments.ts. */
export function addGroupMoments(
  values: usize,
  origin: usize,
  sum: usize,
  squares: usize,
  upperFrom: usize,
  lowerTo: usize,
  upper: usize,
  lower: usize,
  rows: i32,
  start: i32,
): void {
  if (start) {
    for (let x: usize = 0; x < 8; x++) {
      store<f64>(origin + (x << 3), <f64>load<f32>(values + (x << 2)));
      store<f64>(sum + (x << 3), 0);
      store<f64>(squares + (x << 3), 0);
      store<u32>(upper + (x << 2), 0);
      store<u32>(lower + (x << 2), 0);
    }
  }
  for (let half: usize = 0; half < 2; half++) {
    const f32s = half << 4;
    const f64s = half << 5;
    addFour(
      values + f32s,
      origin + f64s,
      sum + f64s,
      squares + f64s,
      upperFrom + f32s,
      lowerTo + f32s,
      upper + f32s,
      lower + f32s,
      rows,
    );
  }
}
