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
 * A first height of a row in microvolts: what half of the channels stay within over about a
 * second, as 1, 2 or 5 times a power of ten. Null until an envelope is there.
 */
export function firstScale(data: TraceData): number | null {
  const piece = data.pyramids.findIndex((arrays) => arrays !== null);
  if (piece < 0) return null;
  const typical = data.file.channels.flatMap((channel, c) => {
    if (channel.unit !== 'uV' || channel.perStep === null) return [];
    const levels = data.levelsOf(piece, c);
    const aboutSecond = levels.findLast((level) => level.samplesPerBin <= channel.samplingRateHz);
    const { at, binCount } = aboutSecond ?? levels[0];
    const values = data.pyramids[piece]![c];
    const ranges = Array.from(
      { length: binCount },
      (_, bin) => values[at + 2 * bin + 1] - values[at + 2 * bin],
    );
    return [median(ranges) * Math.abs(channel.perStep)];
  });
  const range = median(typical);
  return range > 0 ? niceAbove(range) : 100;
}

function median(values: number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)] ?? 0;
}

function niceAbove(value: number): number {
  const power = 10 ** Math.floor(Math.log10(value));
  return [1, 2, 5, 10].find((step) => step * power >= value)! * power;
}
