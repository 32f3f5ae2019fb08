import type { TraceData } from './trace-data';

/** Row heights of channels that are no voltages: each fills its own row. */
export class OwnScales {
  private readonly ranges: Float64Array;
  private seenPieces = 0;

  constructor(private readonly data: TraceData) {
    this.ranges = new Float64Array(data.file.channels.length).fill(-1);
  }

  /** Digital steps in the height of a row. */
  readonly stepsPerRow = (channel: number): number => {
    if (this.seenPieces !== this.data.builtPieces) this.ranges.fill(-1);
    this.seenPieces = this.data.builtPieces;
    if (this.ranges[channel] < 0) this.ranges[channel] = digitalRange(this.data, channel);
    return (this.ranges[channel] || 65535) * 1.2;
  };
}

/** Peak-to-peak of a channel in digital steps over the envelopes that are there; 0 if none are. */
function digitalRange(data: TraceData, channel: number): number {
  let low = Infinity;
  let high = -Infinity;
  data.pyramids.forEach((arrays, piece) => {
    if (!arrays) return;
    const levels = data.levelsOf(piece, channel);
    const { at, binCount } = levels[levels.length - 1];
    for (let bin = 0; bin < binCount; bin++) {
      low = Math.min(low, arrays[channel][at + 2 * bin]);
      high = Math.max(high, arrays[channel][at + 2 * bin + 1]);
    }
  });
  return Math.max(0, high - low);
}

/**
 * A height of a row in microvolts that half of the channels fit into, as 1, 2 or 5 times a power
 * of ten, from how far they usually reach; null when there is none to go by.
 */
export function fittingScale(reachesUv: number[]): number | null {
  const sorted = reachesUv.filter((reach) => reach > 0).sort((a, b) => a - b);
  if (sorted.length === 0) return null;
  const wanted = 1.5 * sorted[Math.floor(sorted.length / 2)];
  const power = 10 ** Math.floor(Math.log10(wanted));
  return [1, 2, 5, 10].find((step) => step * power >= wanted)! * power;
}
