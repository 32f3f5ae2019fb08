import type { FlatPosition } from './head-geometry';

interface Labelled extends FlatPosition {
  text: string;
}

export interface PlacedLabel extends FlatPosition {
  anchor: 'start' | 'middle' | 'end';
}

interface Box {
  left: number;
  right: number;
  top: number;
  bottom: number;
}

/** Average advance of the interface's type at 1 px: enough to keep boxes apart. */
const advance = 0.58;

const places: { dx: number; dy: number; anchor: PlacedLabel['anchor'] }[] = [
  { dx: 0, dy: -1, anchor: 'middle' },
  { dx: 0, dy: 1, anchor: 'middle' },
  { dx: 1, dy: 0, anchor: 'start' },
  { dx: -1, dy: 0, anchor: 'end' },
  { dx: 0.7, dy: -0.8, anchor: 'start' },
  { dx: -0.7, dy: -0.8, anchor: 'end' },
  { dx: 0.7, dy: 0.8, anchor: 'start' },
  { dx: -0.7, dy: 0.8, anchor: 'end' },
];

/**
 * Puts a label beside each point where it crosses the fewest lines and no other label: above
 * unless another side is clearer. Greedy in the given order, so the important come first.
 */
export function placeLabels(
  points: readonly Labelled[],
  lines: readonly (readonly FlatPosition[])[],
  options: { fontPx: number; dotPx: number },
): PlacedLabel[] {
  const { fontPx, dotPx } = options;
  const taken: Box[] = points.map((p) => box(p.x - dotPx, p.x + dotPx, p.y - dotPx, p.y + dotPx));
  return points.map((point, index) => {
    const options = places.map((place, rank) => {
      const label = at(point, place, fontPx, dotPx);
      const area = labelBox(label, point.text, fontPx);
      const crossings = lines.reduce(
        (sum, line) => sum + line.filter((sample) => holds(area, sample)).length,
        0,
      );
      const collisions = taken.filter((other, i) => i !== index && overlap(area, other)).length;
      return { label, area, cost: collisions * 6 + crossings * 2 + rank * 0.3 };
    });
    const best = options.reduce((one, other) => (other.cost < one.cost ? other : one));
    taken.push(best.area);
    return best.label;
  });
}

function at(point: Labelled, place: (typeof places)[number], fontPx: number, dotPx: number) {
  const reach = dotPx + 3;
  const shiftY = place.dy < 0 ? 0 : place.dy > 0 ? fontPx * 0.75 : fontPx * 0.35;
  return {
    x: point.x + place.dx * reach,
    y: point.y + place.dy * reach + shiftY,
    anchor: place.anchor,
  };
}

function labelBox(label: PlacedLabel, text: string, fontPx: number): Box {
  const width = text.length * fontPx * advance;
  const shares = { start: 0, middle: 0.5, end: 1 } as const;
  const left = label.x - width * shares[label.anchor];
  return box(left - 1, left + width + 1, label.y - fontPx * 0.8, label.y + fontPx * 0.2);
}

function box(left: number, right: number, top: number, bottom: number): Box {
  return { left, right, top, bottom };
}

function holds(area: Box, point: FlatPosition): boolean {
  return point.x > area.left && point.x < area.right && point.y > area.top && point.y < area.bottom;
}

function overlap(one: Box, other: Box): boolean {
  return (
    one.left < other.right &&
    other.left < one.right &&
    one.top < other.bottom &&
    other.top < one.bottom
  );
}
