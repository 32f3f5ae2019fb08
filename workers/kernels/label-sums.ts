/** Epochs of a block: its 2^7 subsets' sums are tabulated (measured: 7 or 8 are fastest). */
export const labelBlockBits = 7;

/** Additive terms that are summed side by side, and kept in registers. */
export const labelLanes = 8;

const subsets = 1 << labelBlockBits;

export function labelBlockCount(epochCount: number): number {
  return Math.ceil(epochCount / labelBlockBits);
}

/** Elements of the table that `tabulateSubsets` fills. */
export function labelTableLength(epochCount: number): number {
  return labelBlockCount(epochCount) * subsets * labelLanes;
}

/**
 * Tabulates the sum of every subset of each block of 7 epochs, for 8 lanes of terms.
 * Layout: `terms[epoch * termStride + first + lane]`; out
 * `table[(block * 128 + subset) * 8 + lane]`, bit i of the subset standing for epoch 7 * block + i.
 * Lanes from `laneCount` on are zero. Overwrites `table`; allocates nothing.
 * Cost: one addition an entry, each subset from the one without its highest epoch.
 * Source: table look-up of partial sums, also known from multiplication of bit matrices
 * (Arlazarov et al. 1970).
 */
export function tabulateSubsets(
  terms: Float64Array,
  first: number,
  laneCount: number,
  table: Float64Array,
  shape: { epochCount: number; termStride: number },
): void {
  const { epochCount, termStride } = shape;
  const blocks = labelBlockCount(epochCount);
  for (let block = 0; block < blocks; block++) {
    const base = block * subsets * labelLanes;
    table.fill(0, base, base + labelLanes);
    for (let bit = 0; bit < labelBlockBits; bit++) {
      const epoch = block * labelBlockBits + bit;
      const half = labelLanes << bit;
      for (let lane = 0; lane < labelLanes; lane++) {
        const present = epoch < epochCount && lane < laneCount;
        const term = present ? terms[epoch * termStride + first + lane] : 0;
        for (let at = base + lane; at < base + half; at += labelLanes) {
          table[at + half] = table[at] + term;
        }
      }
    }
  }
}

/**
 * Sums 8 lanes of terms over the epochs labelled A, for a range of permutations.
 * Layout: `masks[permutation * blocks + block]`, 7 bits each; `table` from `tabulateSubsets`; out
 * `sums[(permutation - from) * outStride + lane]` for all 8 lanes.
 * Overwrites `sums`; allocates nothing. Cost: blocks x 8 additions a permutation, in f64, in the
 * order of the blocks.
 */
export function sumLabelled(
  table: Float64Array,
  masks: Uint8Array,
  sums: Float64Array,
  range: { from: number; to: number },
  shape: { blocks: number; outStride: number },
): void {
  const { blocks, outStride } = shape;
  const blockLength = subsets * labelLanes;
  let out = 0;
  for (let p = range.from; p < range.to; p++, out += outStride) {
    let a = 0;
    let b = 0;
    let c = 0;
    let d = 0;
    let e = 0;
    let f = 0;
    let g = 0;
    let h = 0;
    let mask = p * blocks;
    for (let base = 0; base < blocks * blockLength; base += blockLength, mask++) {
      const at = base + masks[mask] * labelLanes;
      a += table[at];
      b += table[at + 1];
      c += table[at + 2];
      d += table[at + 3];
      e += table[at + 4];
      f += table[at + 5];
      g += table[at + 6];
      h += table[at + 7];
    }
    sums[out] = a;
    sums[out + 1] = b;
    sums[out + 2] = c;
    sums[out + 3] = d;
    sums[out + 4] = e;
    sums[out + 5] = f;
    sums[out + 6] = g;
    sums[out + 7] = h;
  }
}
