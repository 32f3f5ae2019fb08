// Bits of a map lie flat, point after point; a row is a stretch of them. Runs of set bits are found
// by counting zeros, joined with the runs of the row above that they touch, mass kept at roots.

/** First bit at or after `from` that is set (`flip` 0) or clear (`flip` all ones); at most `to`. */
function next(bits: usize, from: i32, to: i32, flip: u64): i32 {
  let word = from >> 6;
  let rest =
    (load<u64>(bits + ((<usize>word) << 3)) ^ flip) & (u64.MAX_VALUE << ((from & 63) as u64));
  while (rest === 0) {
    word++;
    if (word << 6 >= to) return to;
    rest = load<u64>(bits + ((<usize>word) << 3)) ^ flip;
  }
  return min((word << 6) + <i32>ctz(rest), to);
}

function rootOf(parents: usize, run: i32): i32 {
  let at = run;
  let above = load<i32>(parents + ((<usize>at) << 2));
  while (above !== at) {
    const next = load<i32>(parents + ((<usize>above) << 2));
    store<i32>(parents + ((<usize>at) << 2), next);
    at = above;
    above = next;
  }
  return at;
}

/** Largest mass of one sign of one map. Scratch: parents, starts, ends i32, masses f64. */
function largest(
  z: usize,
  groupBytes: usize,
  bits: usize,
  scratch: usize,
  F: i32,
  T: i32,
  runs: i32,
): f64 {
  const size = (<usize>runs) << 2;
  const masses = scratch;
  const parents = masses + (size << 1);
  const starts = parents + size;
  const ends = starts + size;
  let best: f64 = 0;
  let run = 0;
  let above = 0;
  let aboveEnd = 0;
  for (let f = 0; f < F; f++) {
    const row = f * T;
    const rowEnd = row + T;
    const rowRun = run;
    let from = next(bits, row, rowEnd, 0);
    while (from < rowEnd) {
      const to = next(bits, from, rowEnd, u64.MAX_VALUE);
      let mass: f64 = 0;
      for (let x = from; x < to; x++) {
        const group = z + <usize>(x >> 3) * groupBytes;
        mass += <f64>abs(load<f32>(group + ((<usize>(x & 7)) << 2)));
      }
      // Compared with the row above in its own columns.
      const start = from - T;
      const end = to - T;
      while (above < aboveEnd && load<i32>(ends + ((<usize>above) << 2)) <= start) above++;
      let root = run;
      for (let o = above; o < aboveEnd && load<i32>(starts + ((<usize>o) << 2)) < end; o++) {
        const other = rootOf(parents, o);
        if (other === root) continue;
        mass += load<f64>(masses + ((<usize>other) << 3));
        if (root === run) root = other;
        else {
          store<i32>(parents + ((<usize>max(other, root)) << 2), min(other, root));
          root = min(other, root);
        }
      }
      store<i32>(parents + ((<usize>run) << 2), root);
      store<f64>(masses + ((<usize>root) << 3), mass);
      store<i32>(starts + ((<usize>run) << 2), from);
      store<i32>(ends + ((<usize>run) << 2), to);
      if (mass > best) best = mass;
      run++;
      from = to < rowEnd ? next(bits, to, rowEnd, 0) : rowEnd;
    }
    above = rowRun;
    aboveEnd = run;
  }
  return best;
}

/** Twin: ../cluster-masses.ts. */
export function addClusterMasses(
  z: usize,
  positive: usize,
  negative: usize,
  masses: usize,
  scratch: usize,
  rows: i32,
  F: i32,
  T: i32,
  bitStride: i32,
  tailSign: i32,
): void {
  const runs = F * ((T + 1) >> 1);
  const groupBytes = (<usize>rows) << 5;
  for (let row = 0; row < rows; row++) {
    let mass: f64 = 0;
    if (tailSign >= 0) mass = largest(z, groupBytes, positive, scratch, F, T, runs);
    if (tailSign <= 0) mass = max(mass, largest(z, groupBytes, negative, scratch, F, T, runs));
    if (<f32>mass > load<f32>(masses)) store<f32>(masses, <f32>mass);
    z += 32;
    positive += <usize>bitStride;
    negative += <usize>bitStride;
    masses += 4;
  }
}
