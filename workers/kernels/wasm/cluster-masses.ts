// Bits of a map lie flat, point after point; a row is a stretch of them. Runs of set bits are found
// by counting zeros, joined with the runs of the row above that they touch, mass kept at roots.

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

/** Lists the runs of set bits from `row` to before `rowEnd`; returns how many there are then. */
function runsOf(bits: usize, row: i32, rowEnd: i32, starts: usize, ends: usize, runs: i32): i32 {
  let open = -1;
  for (let base = row & ~63; base < rowEnd; base += 64) {
    let word = load<u64>(bits + ((<usize>base) >> 3));
    const before = (row - base) as u64;
    const after = (base + 64 - rowEnd) as u64;
    if (base < row) word &= u64.MAX_VALUE << before;
    if (base + 64 > rowEnd) word &= u64.MAX_VALUE >> after;
    if (open >= 0) {
      const end = <i32>ctz(~word);
      if (end === 64) continue;
      store<i32>(starts + ((<usize>runs) << 2), open);
      store<i32>(ends + ((<usize>runs) << 2), base + end);
      runs++;
      open = -1;
      word = (word >> (end as u64)) << (end as u64);
    }
    while (word) {
      const start = <i32>ctz(word);
      const end = start + <i32>ctz(~(word >> (start as u64)));
      if (end >= 64) {
        open = base + start;
        break;
      }
      store<i32>(starts + ((<usize>runs) << 2), base + start);
      store<i32>(ends + ((<usize>runs) << 2), base + end);
      runs++;
      word = (word >> (end as u64)) << (end as u64);
    }
  }
  if (open < 0) return runs;
  store<i32>(starts + ((<usize>runs) << 2), open);
  store<i32>(ends + ((<usize>runs) << 2), rowEnd);
  return runs + 1;
}

/**
 * Largest mass of one sign of one map. `z` is the first marked value, `step` the bytes to the next.
 * Scratch: masses f64, then parents, starts, ends i32, of at most `most` runs.
 */
function largest(
  z: usize,
  step: isize,
  bits: usize,
  scratch: usize,
  F: i32,
  T: i32,
  most: i32,
): f64 {
  const size = (<usize>most) << 2;
  const masses = scratch;
  const parents = masses + (size << 1);
  const starts = parents + size;
  const ends = starts + size;
  let best: f64 = 0;
  let above = 0;
  let runs = 0;
  for (let f = 0; f < F; f++) {
    const row = f * T;
    const aboveEnd = runs;
    runs = runsOf(bits, row, row + T, starts, ends, runs);
    for (let run = aboveEnd; run < runs; run++) {
      const from = load<i32>(starts + ((<usize>run) << 2));
      const to = load<i32>(ends + ((<usize>run) << 2));
      let mass: f64 = 0;
      for (let x = from; x < to; x++, z += step) mass += <f64>load<f32>(z);
      mass = abs(mass);
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
      if (mass > best) best = mass;
    }
    above = aboveEnd;
  }
  return best;
}

/** Twin: ../cluster-masses.ts. */
export function addClusterMasses(
  beyond: usize,
  positive: usize,
  negative: usize,
  masses: usize,
  scratch: usize,
  rows: i32,
  F: i32,
  T: i32,
  stride: i32,
  bitStride: i32,
  tailSign: i32,
): void {
  const most = F * ((T + 1) >> 1);
  const bytes = (<usize>stride) << 2;
  for (let row = 0; row < rows; row++) {
    let mass: f64 = 0;
    if (tailSign >= 0) mass = largest(beyond, 4, positive, scratch, F, T, most);
    beyond += bytes;
    if (tailSign <= 0) mass = max(mass, largest(beyond - 4, -4, negative, scratch, F, T, most));
    if (<f32>mass > load<f32>(masses)) store<f32>(masses, <f32>mass);
    positive += <usize>bitStride;
    negative += <usize>bitStride;
    masses += 4;
  }
}
