/**
 * The envelope of one channel's piece at several resolutions: level l holds the smallest and
 * largest digital value of every `baseSamples * 4^l` samples, as [min, max, min, max, ...].
 */
export interface PyramidLevel {
  samplesPerBin: number;
  binCount: number;
  /** Index of the level's first value in the channel's pyramid. */
  at: number;
}

const FACTOR = 4;
const FEWEST_BINS = 4;

/** The levels for a piece of `samples`; the last has few bins. */
export function pyramidLevels(samples: number, baseSamples: number): PyramidLevel[] {
  const levels: PyramidLevel[] = [];
  let at = 0;
  let samplesPerBin = baseSamples;
  for (;;) {
    const binCount = Math.ceil(samples / samplesPerBin);
    levels.push({ samplesPerBin, binCount, at });
    at += binCount * 2;
    if (binCount <= FEWEST_BINS) return levels;
    samplesPerBin *= FACTOR;
  }
}

/** Values that the levels hold together. */
export function pyramidLength(levels: PyramidLevel[]): number {
  const last = levels[levels.length - 1];
  return last.at + last.binCount * 2;
}

/** Fills `out` with the pyramid of `samples`. Allocates nothing. */
export function fillPyramid(samples: Int16Array, levels: PyramidLevel[], out: Int16Array): void {
  const base = levels[0];
  for (let bin = 0; bin < base.binCount; bin++) {
    const from = bin * base.samplesPerBin;
    const to = Math.min(samples.length, from + base.samplesPerBin);
    let least = samples[from];
    let most = least;
    for (let i = from + 1; i < to; i++) {
      const value = samples[i];
      if (value < least) least = value;
      else if (value > most) most = value;
    }
    out[2 * bin] = least;
    out[2 * bin + 1] = most;
  }
  for (let l = 1; l < levels.length; l++) fillFromBelow(levels[l - 1], levels[l], out);
}

function fillFromBelow(below: PyramidLevel, level: PyramidLevel, out: Int16Array): void {
  for (let bin = 0; bin < level.binCount; bin++) {
    const from = bin * FACTOR;
    const to = Math.min(below.binCount, from + FACTOR);
    let least = out[below.at + 2 * from];
    let most = out[below.at + 2 * from + 1];
    for (let i = from + 1; i < to; i++) {
      least = Math.min(least, out[below.at + 2 * i]);
      most = Math.max(most, out[below.at + 2 * i + 1]);
    }
    out[level.at + 2 * bin] = least;
    out[level.at + 2 * bin + 1] = most;
  }
}

/** Samples under a bin of the finest level, so that the pyramid of all data keeps within `mostBytes`. */
export function chooseBase(fileBytes: number, mostBytes: number): number {
  let base = 8;
  // Two values for each bin, and a third more for the levels above.
  while ((fileBytes / base) * 2 * (4 / 3) > mostBytes) base *= 2;
  return base;
}
