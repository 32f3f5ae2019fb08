import { ticks } from 'd3';

export interface TraceEvent {
  onsetS: number;
  durationS: number | null;
  label: string;
}

export interface TimeTick {
  atS: number;
  text: string;
}

/** Round times in a window, about `count` of them, as seconds or as hours, minutes and seconds. */
export function timeTicks(startS: number, endS: number, count: number): TimeTick[] {
  const span = endS - startS;
  const steps = [15, 30, 60, 120, 300, 600, 900, 1800, 3600, 7200, 14400, 21600, 43200, 86400];
  const rough = span / Math.max(1, count);
  const asClock = rough > 12;
  const step = steps.find((candidate) => candidate >= rough) ?? 86400 * Math.ceil(rough / 86400);
  const places = asClock
    ? Array.from(
        { length: Math.floor(endS / step) - Math.ceil(startS / step) + 1 },
        (_, i) => (Math.ceil(startS / step) + i) * step,
      )
    : ticks(startS, endS, Math.max(1, count));
  const gap = places.length > 1 ? places[1] - places[0] : span;
  const digits = Math.max(0, Math.ceil(-Math.log10(gap) - 1e-9));
  return places.map((atS) => ({ atS, text: clockText(atS, asClock ? 0 : digits) }));
}

/** "12.5", "2:05", "1:02:05"; below a minute plain seconds. */
export function clockText(seconds: number, digits: number): string {
  const sign = seconds < 0 ? '−' : '';
  const fixed = Math.abs(seconds).toFixed(digits);
  const size = Number(fixed);
  if (size < 60) return sign + fixed;
  const hours = Math.floor(size / 3600);
  const minutes = Math.floor((size - hours * 3600) / 60);
  const rest = (size - hours * 3600 - minutes * 60).toFixed(digits);
  const two = (text: string) => (text.split('.')[0].length < 2 ? `0${text}` : text);
  return hours > 0
    ? `${sign}${hours}:${two(String(minutes))}:${two(rest)}`
    : `${sign}${minutes}:${two(rest)}`;
}

/** Index of the first event at or after a time; events are in order of onset. */
export function firstEventAt(events: readonly TraceEvent[], timeS: number): number {
  let low = 0;
  let high = events.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (events[middle].onsetS < timeS) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Stretches of a window that were not recorded. */
export function gapsIn(
  segments: readonly { startS: number; durationS: number }[],
  startS: number,
  endS: number,
): [number, number][] {
  const gaps: [number, number][] = [];
  let coveredS = startS;
  for (const segment of segments) {
    if (segment.startS >= endS) break;
    if (segment.startS > coveredS) gaps.push([coveredS, segment.startS]);
    coveredS = Math.max(coveredS, segment.startS + segment.durationS);
  }
  if (coveredS < endS) gaps.push([coveredS, endS]);
  return gaps;
}
