/**
 * Which of `count` evenly spaced labels fit at `spacing` pixels when each needs `needed`.
 * Labels that must show (a chosen row) push out regular ones that would touch them.
 */
export function visibleLabels(
  count: number,
  spacing: number,
  needed: number,
  always: readonly number[] = [],
): number[] {
  const step = Math.max(1, Math.ceil(needed / spacing));
  const kept = [...new Set(always)].filter((i) => i >= 0 && i < count);
  const clear = (i: number) => kept.every((k) => Math.abs(k - i) * spacing >= needed);
  const firm = kept.filter((i, at) =>
    kept.slice(0, at).every((earlier) => Math.abs(earlier - i) * spacing >= needed),
  );
  const regular: number[] = [];
  for (let i = 0; i < count; i += step) if (clear(i)) regular.push(i);
  return [...firm, ...regular].sort((one, other) => one - other);
}

const roundHz = [1, 2, 3, 4, 5, 6, 8, 10, 12, 15, 20, 25, 30, 40, 50, 60, 80];

/**
 * Round frequencies as labels of a map whose rows are any frequencies, ascending: `row` is where
 * the frequency falls between the rows' centres. A grid that holds fewer than two round ones is
 * labelled by its own ends.
 */
export function frequencyTicks(
  frequenciesHz: readonly number[],
  rowPx: number,
  neededPx: number,
): { hz: number; row: number }[] {
  const last = frequenciesHz.length - 1;
  const candidates = [0.1, 1, 10].flatMap((scale) => roundHz.map((hz) => hz * scale));
  const kept: { hz: number; row: number }[] = [];
  for (const hz of [...new Set(candidates)].sort((a, b) => a - b)) {
    const row = rowOf(frequenciesHz, hz);
    const before = kept.at(-1);
    if (row !== null && (!before || (row - before.row) * rowPx >= neededPx)) kept.push({ hz, row });
  }
  if (kept.length >= 2 || last < 1) {
    return kept.length > 0 ? kept : [{ hz: frequenciesHz[0]!, row: 0 }];
  }
  return [
    { hz: frequenciesHz[0]!, row: 0 },
    { hz: frequenciesHz[last]!, row: last },
  ];
}

/** Straight between the logarithms of neighbouring rows; null beyond the grid. */
function rowOf(frequenciesHz: readonly number[], hz: number): number | null {
  const tolerance = 1e-9 * hz;
  for (let row = 0; row < frequenciesHz.length; row++) {
    const here = frequenciesHz[row]!;
    if (Math.abs(here - hz) <= tolerance) return row;
    const next = frequenciesHz[row + 1];
    if (next !== undefined && here < hz && hz < next) {
      return row + Math.log(hz / here) / Math.log(next / here);
    }
  }
  return null;
}
