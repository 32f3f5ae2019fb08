// A block is 7 epochs, an entry 16 lanes of f32 (64 bytes), a chunk 4 blocks: its tables, 32 KB,
// stay in the first cache while all permutations are added.
const blockBits = 7;
const entryShift: usize = 6;
const blockBytes: usize = (1 << blockBits) << entryShift;
const blocksPerChunk = 4;

/** Tabulates the sums of all subsets of a block, each from the one without its highest epoch. */
function tabulate(terms: usize, epochs: i32, table: usize): void {
  const zero = f32x4.splat(0);
  v128.store(table, zero);
  v128.store(table, zero, 16);
  v128.store(table, zero, 32);
  v128.store(table, zero, 48);
  for (let bit = 0; bit < epochs; bit++, terms += 64) {
    const a = v128.load(terms);
    const b = v128.load(terms, 16);
    const c = v128.load(terms, 32);
    const d = v128.load(terms, 48);
    let to = table + (((<usize>1) << bit) << entryShift);
    const end = to;
    for (let from = table; from < end; from += 64, to += 64) {
      v128.store(to, f32x4.add(v128.load(from), a));
      v128.store(to, f32x4.add(v128.load(from, 16), b), 16);
      v128.store(to, f32x4.add(v128.load(from, 32), c), 32);
      v128.store(to, f32x4.add(v128.load(from, 48), d), 48);
    }
  }
}

function addFour(offsets: usize, rows: i32, table: usize, sums: usize, first: bool): void {
  const t1 = table + blockBytes;
  const t2 = t1 + blockBytes;
  const t3 = t2 + blockBytes;
  const end = sums + ((<usize>rows) << entryShift);
  for (; sums < end; sums += 64, offsets += 8) {
    const p = table + <usize>load<u16>(offsets);
    const q = t1 + <usize>load<u16>(offsets, 2);
    const r = t2 + <usize>load<u16>(offsets, 4);
    const s = t3 + <usize>load<u16>(offsets, 6);
    let a = f32x4.add(f32x4.add(v128.load(p), v128.load(q)), f32x4.add(v128.load(r), v128.load(s)));
    let b = f32x4.add(
      f32x4.add(v128.load(p, 16), v128.load(q, 16)),
      f32x4.add(v128.load(r, 16), v128.load(s, 16)),
    );
    let c = f32x4.add(
      f32x4.add(v128.load(p, 32), v128.load(q, 32)),
      f32x4.add(v128.load(r, 32), v128.load(s, 32)),
    );
    let d = f32x4.add(
      f32x4.add(v128.load(p, 48), v128.load(q, 48)),
      f32x4.add(v128.load(r, 48), v128.load(s, 48)),
    );
    if (!first) {
      a = f32x4.add(v128.load(sums), a);
      b = f32x4.add(v128.load(sums, 16), b);
      c = f32x4.add(v128.load(sums, 32), c);
      d = f32x4.add(v128.load(sums, 48), d);
    }
    v128.store(sums, a);
    v128.store(sums, b, 16);
    v128.store(sums, c, 32);
    v128.store(sums, d, 48);
  }
}

/** A block by itself, of a last chunk that is not full. */
function addOne(offsets: usize, rows: i32, table: usize, sums: usize, first: bool): void {
  const end = sums + ((<usize>rows) << entryShift);
  for (; sums < end; sums += 64, offsets += 8) {
    const p = table + <usize>load<u16>(offsets);
    let a = v128.load(p);
    let b = v128.load(p, 16);
    let c = v128.load(p, 32);
    let d = v128.load(p, 48);
    if (!first) {
      a = f32x4.add(v128.load(sums), a);
      b = f32x4.add(v128.load(sums, 16), b);
      c = f32x4.add(v128.load(sums, 32), c);
      d = f32x4.add(v128.load(sums, 48), d);
    }
    v128.store(sums, a);
    v128.store(sums, b, 16);
    v128.store(sums, c, 32);
    v128.store(sums, d, 48);
  }
}

/** Twin: ../label-lanes.ts. */
export function sumLabelledLanes(
  terms: usize,
  offsets: usize,
  table: usize,
  sums: usize,
  epochCount: i32,
  rows: i32,
): void {
  const blocks = (epochCount + blockBits - 1) / blockBits;
  const chunkOffsets = (<usize>rows) << 3;
  for (let block = 0; block < blocks; block += blocksPerChunk, offsets += chunkOffsets) {
    const here = min(blocksPerChunk, blocks - block);
    for (let i = 0; i < here; i++) {
      const epoch = (block + i) * blockBits;
      const epochs = min(blockBits, epochCount - epoch);
      tabulate(terms + ((<usize>epoch) << entryShift), epochs, table + <usize>i * blockBytes);
    }
    if (here === blocksPerChunk) {
      addFour(offsets, rows, table, sums, block === 0);
    } else {
      for (let i = 0; i < here; i++) {
        const at = <usize>i;
        addOne(offsets + (at << 1), rows, table + at * blockBytes, sums, block + i === 0);
      }
    }
  }
}
