import { groupLanes } from './group';
import { labelBlockBits, labelBlockCount } from './label-sums';

/** Blocks whose tables stay in a core's first cache together while all permutations are added. */
const blocksPerChunk = 4;
const subsets = 1 << labelBlockBits;
const entryBytes = groupLanes * Float32Array.BYTES_PER_ELEMENT;

/** Elements of the offsets of `rows` permutations. */
export function labelOffsetCount(epochCount: number, rows: number): number {
  return Math.ceil(labelBlockCount(epochCount) / blocksPerChunk) * rows * blocksPerChunk;
}

/** Elements of the table that `sumLabelledLanes` needs. */
export const labelLaneTableLength = blocksPerChunk * subsets * groupLanes;

/**
 * Rearranges label masks into byte offsets of table entries: from
 * `masks[permutation * blocks + block]` to `offsets[(chunk * rows + row) * 4 + block - 4 * chunk]`.
 * Overwrites `offsets`. Done once for a range of permutations, whatever the number of pairs.
 */
export function labelOffsets(
  masks: Uint8Array,
  offsets: Uint16Array,
  epochCount: number,
  range: { from: number; to: number },
): void {
  const blocks = labelBlockCount(epochCount);
  const rows = range.to - range.from;
  for (let row = 0; row < rows; row++) {
    for (let block = 0; block < blocks; block++) {
      const chunk = Math.floor(block / blocksPerChunk);
      const at = (chunk * rows + row) * blocksPerChunk + (block % blocksPerChunk);
      offsets[at] = masks[(range.from + row) * blocks + block] * entryBytes;
    }
  }
}

/**
 * Sums 16 lanes of terms over the epochs labelled A, for many permutations: for each block of 7
 * epochs the sums of all subsets are tabulated, and each permutation adds one entry a block.
 * Layout: `terms[epoch * 16 + lane]`, `offsets` from `labelOffsets`; out `sums[row * 16 + lane]`.
 * Overwrites `table` and `sums`; allocates nothing; f32 arithmetic: a sum of n unit vectors errs by
 * about 6e-8 sqrt(n / 28) of n. Four tables are summed before they are added to the running sum.
 * Cost: n / 7 additions a permutation and lane, and the tables.
 * Source: table look-up of partial sums, also known from multiplication of bit matrices
 * (Arlazarov et al. 1970).
 */
export function sumLabelledLanes(
  terms: Float32Array,
  offsets: Uint16Array,
  table: Float32Array,
  sums: Float32Array,
  shape: { epochCount: number; rows: number },
): void {
  const { epochCount, rows } = shape;
  const blocks = labelBlockCount(epochCount);
  for (let block = 0; block < blocks; block += blocksPerChunk) {
    const here = Math.min(blocksPerChunk, blocks - block);
    for (let i = 0; i < here; i++) {
      const epoch = (block + i) * labelBlockBits;
      const epochs = Math.min(labelBlockBits, epochCount - epoch);
      tabulate(
        terms.subarray(epoch * groupLanes),
        epochs,
        table.subarray(i * subsets * groupLanes),
      );
    }
    const chunk = offsets.subarray((block / blocksPerChunk) * rows * blocksPerChunk);
    if (block === 0) sums.fill(0, 0, rows * groupLanes);
    if (here === blocksPerChunk) addFour(chunk, rows, table, sums);
    else for (let i = 0; i < here; i++) addOne(chunk, rows, table, sums, i);
  }
}

function tabulate(terms: Float32Array, epochs: number, table: Float32Array): void {
  table.fill(0, 0, groupLanes);
  for (let bit = 0; bit < epochs; bit++) {
    const half = groupLanes << bit;
    const term = bit * groupLanes;
    for (let at = 0; at < half; at++) table[half + at] = table[at] + terms[term + (at & 15)];
  }
}

function addFour(
  offsets: Uint16Array,
  rows: number,
  table: Float32Array,
  sums: Float32Array,
): void {
  const { fround } = Math;
  const block = subsets * groupLanes;
  for (let row = 0; row < rows; row++) {
    const p = offsets[4 * row] >> 2;
    const q = block + (offsets[4 * row + 1] >> 2);
    const r = 2 * block + (offsets[4 * row + 2] >> 2);
    const s = 3 * block + (offsets[4 * row + 3] >> 2);
    for (let lane = 0; lane < groupLanes; lane++) {
      const first = fround(table[p + lane] + table[q + lane]);
      const second = fround(table[r + lane] + table[s + lane]);
      sums[row * groupLanes + lane] += fround(first + second);
    }
  }
}

/** A block by itself, of a last chunk that is not full. */
function addOne(
  offsets: Uint16Array,
  rows: number,
  table: Float32Array,
  sums: Float32Array,
  index: number,
): void {
  const base = index * subsets * groupLanes;
  for (let row = 0; row < rows; row++) {
    const entry = base + (offsets[4 * row + index] >> 2);
    for (let lane = 0; lane < groupLanes; lane++) {
      sums[row * groupLanes + lane] += table[entry + lane];
    }
  }
}
