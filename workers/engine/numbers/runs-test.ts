import { logChoose } from './counting';

/** Outcome of a runs test over one or several sequences of two labels. */
export interface RunsTest {
  /** Runs found, over all sequences. */
  runs: number;
  /** Runs expected when every order is equally likely. */
  expected: number;
  /** P(at most this many runs): small when the labels come in blocks. */
  p: number;
}

/**
 * Wald and Wolfowitz 1940: exact lower-tail probability of the number of runs, given the counts of
 * both labels in each sequence. Sequences (recordings) are independent: their run counts add, and
 * so do their distributions by convolution. A sequence with one label only says nothing and adds
 * nothing. `sequences[i][n]` is true where epoch n of sequence i, in time, belongs to A.
 */
export function runsTest(sequences: boolean[][]): RunsTest {
  let distribution = [1];
  let runs = 0;
  let expected = 0;
  for (const sequence of sequences) {
    const n = sequence.length;
    const a = sequence.filter(Boolean).length;
    if (a === 0 || a === n) continue;
    runs += countRuns(sequence);
    expected += 1 + (2 * a * (n - a)) / n;
    distribution = convolve(distribution, runsDistribution(a, n - a));
  }
  const p = distribution.slice(0, runs + 1).reduce((sum, q) => sum + q, 0);
  return { runs, expected, p: Math.min(1, p) };
}

export function countRuns(sequence: boolean[]): number {
  return sequence.reduce(
    (sum, label, i) => sum + (i === 0 || label !== sequence[i - 1] ? 1 : 0),
    0,
  );
}

/** P(runs = r) for r = 0 .. a + b, both counts at least 1. */
export function runsDistribution(a: number, b: number): number[] {
  const all = logChoose(a + b, a);
  const ways = (ka: number, kb: number) =>
    Math.exp(logChoose(a - 1, ka - 1) + logChoose(b - 1, kb - 1) - all);
  return Array.from({ length: a + b + 1 }, (_, r) => {
    if (r < 2) return 0;
    const half = r >> 1;
    return r % 2 === 0 ? 2 * ways(half, half) : ways(half + 1, half) + ways(half, half + 1);
  });
}

function convolve(p: number[], q: number[]): number[] {
  const out = new Array<number>(p.length + q.length - 1).fill(0);
  p.forEach((x, i) => q.forEach((y, j) => (out[i + j] += x * y)));
  return out;
}
