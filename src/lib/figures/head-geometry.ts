/** A direction on the unit sphere: x to the right ear, y to the nose, z up. */
export interface SpherePosition {
  x: number;
  y: number;
  z: number;
}

export interface FlatPosition {
  x: number;
  y: number;
}

/** Sites at the ears' height lie this far out; the head's circle is 1. */
const equatorRadius = 0.92;

/**
 * Seen from above, nose up: the angle from the top becomes the distance from the centre
 * (azimuthal equidistant), so neighbouring sites keep their spacing. Right is +x, front is −y,
 * as screens count.
 */
export function projectSite(position: SpherePosition): FlatPosition {
  const fromTop = Math.acos(Math.max(-1, Math.min(1, position.z)));
  const across = Math.hypot(position.x, position.y);
  if (across < 1e-9) return { x: 0, y: 0 };
  const radius = (fromTop / (Math.PI / 2)) * equatorRadius;
  return { x: (position.x / across) * radius, y: (-position.y / across) * radius };
}

export interface Curve {
  path: string;
  /** Points along the curve, to keep labels clear of it. */
  samples: FlatPosition[];
}

/**
 * A line between two sites, bent away from the centre so that it does not run through the sites
 * that lie between them.
 */
export function siteCurve(from: FlatPosition, to: FlatPosition, centre: FlatPosition): Curve {
  const middle = { x: (from.x + to.x) / 2, y: (from.y + to.y) / 2 };
  const dx = to.x - from.x;
  const dy = to.y - from.y;
  const length = Math.hypot(dx, dy) || 1;
  const outward = (middle.x - centre.x) * -dy + (middle.y - centre.y) * dx >= 0 ? 1 : -1;
  const bend = length * 0.16 * outward;
  const control = { x: middle.x + (-dy / length) * bend, y: middle.y + (dx / length) * bend };
  const samples = Array.from({ length: 15 }, (_, i) => {
    const t = (i + 1) / 16;
    return {
      x: (1 - t) ** 2 * from.x + 2 * t * (1 - t) * control.x + t ** 2 * to.x,
      y: (1 - t) ** 2 * from.y + 2 * t * (1 - t) * control.y + t ** 2 * to.y,
    };
  });
  const path = `M${n(from.x)} ${n(from.y)}Q${n(control.x)} ${n(control.y)} ${n(to.x)} ${n(to.y)}`;
  return { path, samples };
}

function n(value: number): number {
  return Math.round(value * 10) / 10;
}
