/** One bar of a histogram: values from `from` (included) to `to` (excluded, but for the last). */
export interface Bin {
  from: number;
  to: number;
  count: number;
}

/**
 * Counts values into equal bins that begin and end at round numbers. Values that are not finite
 * are left out; no values give no bins.
 */
export function binValues(values: ArrayLike<number>, aboutBins = 30): Bin[] {
  let low = Infinity;
  let high = -Infinity;
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    if (!Number.isFinite(value)) continue;
    if (value < low) low = value;
    if (value > high) high = value;
  }
  if (low > high) return [];
  // A spread below what doubles tell apart at this size would make edges that coincide.
  const size = Math.max(Math.abs(low), Math.abs(high));
  const spread = Math.max(high > low ? high - low : size || 1, 1e-9 * size, 1e-12);
  const width = roundStep(spread / aboutBins);
  const first = Math.floor(low / width);
  const count = Math.max(1, Math.floor(high / width) - first + 1);
  const bins = Array.from({ length: count }, (_, i) => ({
    from: (first + i) * width,
    to: (first + i + 1) * width,
    count: 0,
  }));
  for (let i = 0; i < values.length; i++) {
    if (!Number.isFinite(values[i]!)) continue;
    const index = Math.floor(values[i]! / width) - first;
    const bin = bins[Math.max(0, Math.min(count - 1, index))];
    if (bin) bin.count += 1;
  }
  return bins;
}

/** The next larger of 1, 2, 5 times a power of ten. */
function roundStep(step: number): number {
  const power = 10 ** Math.floor(Math.log10(step));
  const factor = [1, 2, 5, 10].find((candidate) => candidate * power >= step * 0.999999) ?? 10;
  return factor * power;
}
