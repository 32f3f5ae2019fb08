export interface LaneEvent {
  onsetS: number;
  durationS: number | null;
  label: string;
}

/** The events of one label. */
export interface EventLane {
  label: string;
  events: LaneEvent[];
  firstS: number;
  lastS: number;
  /** Between neighbouring onsets; null for a single event. */
  medianIntervalS: number | null;
  /** Of those that have one. */
  medianDurationS: number | null;
}

/** Groups events by label, the most frequent first; each lane in order of onset. */
export function eventLanes(events: readonly LaneEvent[]): EventLane[] {
  const groups = new Map<string, LaneEvent[]>();
  for (const event of events) {
    const group = groups.get(event.label);
    if (group) group.push(event);
    else groups.set(event.label, [event]);
  }
  return [...groups]
    .map(([label, group]) =>
      laneOf(
        label,
        group.toSorted((a, b) => a.onsetS - b.onsetS),
      ),
    )
    .sort((a, b) => b.events.length - a.events.length || a.label.localeCompare(b.label, 'en'));
}

function laneOf(label: string, events: LaneEvent[]): EventLane {
  const durations = events.flatMap(({ durationS }) => (durationS === null ? [] : [durationS]));
  const intervals = events.slice(1).map(({ onsetS }, i) => onsetS - events[i].onsetS);
  return {
    label,
    events,
    firstS: events[0].onsetS,
    lastS: events[events.length - 1].onsetS,
    medianIntervalS: median(intervals),
    medianDurationS: median(durations),
  };
}

function median(values: number[]): number | null {
  if (values.length === 0) return null;
  const sorted = values.toSorted((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}

/**
 * One SVG path for all events of a lane: a bar for each duration, a tick for each onset. Events
 * that fall into one pixel are drawn once.
 */
export function lanePath(
  events: readonly LaneEvent[],
  xOf: (timeS: number) => number,
  heightPx: number,
): { ticks: string; bars: string } {
  const ticks: string[] = [];
  const bars: string[] = [];
  let before = NaN;
  for (const { onsetS, durationS } of events) {
    const x = Math.round(xOf(onsetS));
    const width = durationS === null ? 0 : Math.round(xOf(onsetS + durationS)) - x;
    if (width > 1) bars.push(`M${x} ${heightPx * 0.3}h${width}v${heightPx * 0.4}h${-width}z`);
    if (x === before) continue;
    ticks.push(`M${x + 0.5} ${heightPx * 0.12}v${heightPx * 0.76}`);
    before = x;
  }
  return { ticks: ticks.join(''), bars: bars.join('') };
}
