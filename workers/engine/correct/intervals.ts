/**
 * Unions of closed intervals of numbers, as flat lists [from, to, from, to, ...], ascending and
 * disjoint.
 */

/** Joins two unions. Cost: one step an interval. */
export function joinIntervals(a: number[], b: number[]): number[] {
  if (a.length === 0) return b;
  if (b.length === 0) return a;
  const out: number[] = [];
  let i = 0;
  let j = 0;
  while (i < a.length || j < b.length) {
    const fromA = j >= b.length || (i < a.length && a[i] <= b[j]);
    const from = fromA ? a[i] : b[j];
    const to = fromA ? a[i + 1] : b[j + 1];
    if (fromA) i += 2;
    else j += 2;
    append(out, from, to);
  }
  return out;
}

/** Adds an interval that does not begin before the last one does. */
export function append(union: number[], from: number, to: number): void {
  const last = union.length - 1;
  if (last > 0 && from <= union[last]) union[last] = Math.max(union[last], to);
  else union.push(from, to);
}
