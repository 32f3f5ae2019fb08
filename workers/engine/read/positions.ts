/** A place on the unit sphere: x to the right ear, y to the nose, z up. */
export interface Position {
  x: number;
  y: number;
  z: number;
}

type Vector = [number, number, number];

/** Half a turn from nasion to inion and from ear to ear: each 10 % is 18 degrees. */
const STEP_DEG = 18;

const MIDLINE = ['Nz', 'Fpz', 'AFz', 'Fz', 'FCz', 'Cz', 'CPz', 'Pz', 'POz', 'Oz', 'Iz'];
const CORONAL = ['T9', 'T7', 'C5', 'C3', 'C1', 'Cz', 'C2', 'C4', 'C6', 'T8', 'T10'];
/** Left and right, each 10 % further from the midline's front to its back. */
const CIRCUMFERENCE = [
  ['Fp1', 'Fp2'],
  ['AF7', 'AF8'],
  ['F7', 'F8'],
  ['FT7', 'FT8'],
  ['T7', 'T8'],
  ['TP7', 'TP8'],
  ['P7', 'P8'],
  ['PO7', 'PO8'],
  ['O1', 'O2'],
];
/** The same one step lower, on the nasion's and inion's level. */
const LOWER = [
  ['Fp9', 'Fp10'],
  ['AF9', 'AF10'],
  ['F9', 'F10'],
  ['FT9', 'FT10'],
  ['T9', 'T10'],
  ['TP9', 'TP10'],
  ['P9', 'P10'],
  ['PO9', 'PO10'],
  ['O9', 'O10'],
];
/** Rows between the circumference and the midline, each eighth of the arc through the three. */
const ROWS = [
  ['AF7', 'AF5', 'AF3', 'AF1', 'AFz', 'AF2', 'AF4', 'AF6', 'AF8'],
  ['F7', 'F5', 'F3', 'F1', 'Fz', 'F2', 'F4', 'F6', 'F8'],
  ['FT7', 'FC5', 'FC3', 'FC1', 'FCz', 'FC2', 'FC4', 'FC6', 'FT8'],
  ['TP7', 'CP5', 'CP3', 'CP1', 'CPz', 'CP2', 'CP4', 'CP6', 'TP8'],
  ['P7', 'P5', 'P3', 'P1', 'Pz', 'P2', 'P4', 'P6', 'P8'],
  ['PO7', 'PO5', 'PO3', 'PO1', 'POz', 'PO2', 'PO4', 'PO6', 'PO8'],
];

function onSphere(colatitudeDeg: number, azimuthDeg: number): Vector {
  const colatitude = (colatitudeDeg * Math.PI) / 180;
  const azimuth = (azimuthDeg * Math.PI) / 180;
  const ring = Math.sin(colatitude);
  return [ring * Math.cos(azimuth), ring * Math.sin(azimuth), Math.cos(colatitude)];
}

const minus = (a: Vector, b: Vector): Vector => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
const times = (a: Vector, s: number): Vector => [a[0] * s, a[1] * s, a[2] * s];
const plus = (a: Vector, b: Vector): Vector => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
const dot = (a: Vector, b: Vector): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
const unit = (a: Vector): Vector => times(a, 1 / Math.sqrt(dot(a, a)));
const cross = (a: Vector, b: Vector): Vector => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

/** The point at a fraction of the small-circle arc from `a` through `b` to `c`. */
function alongArc(a: Vector, b: Vector, c: Vector, fraction: number): Vector {
  const axis = unit(cross(minus(b, a), minus(c, a)));
  const centre = times(axis, dot(axis, a));
  const spoke = minus(a, centre);
  const radius = Math.sqrt(dot(spoke, spoke));
  const along = times(spoke, 1 / radius);
  const across = cross(axis, along);
  const end = minus(c, centre);
  const turn = Math.atan2(dot(end, across), dot(end, along));
  const angle = (turn < 0 ? turn + 2 * Math.PI : turn) * fraction;
  return plus(
    centre,
    plus(times(along, radius * Math.cos(angle)), times(across, radius * Math.sin(angle))),
  );
}

function derive(): Map<string, Position> {
  const places = new Map<string, Vector>();
  MIDLINE.forEach((site, i) => places.set(site, onSphere((i - 5) * STEP_DEG, -90)));
  CORONAL.forEach((site, i) => places.set(site, onSphere((i - 5) * STEP_DEG, 0)));
  const ring = (pairs: string[][], colatitudeDeg: number) =>
    pairs.forEach(([left, right], i) => {
      const fromNose = (i + 1) * STEP_DEG;
      places.set(left, onSphere(colatitudeDeg, 90 + fromNose));
      places.set(right, onSphere(colatitudeDeg, 90 - fromNose));
    });
  ring(CIRCUMFERENCE, 4 * STEP_DEG);
  ring(LOWER, 5 * STEP_DEG);
  for (const row of ROWS) {
    const [left, middle, right] = [row[0], row[4], row[8]].map((site) => places.get(site)!);
    row.forEach((site, i) => {
      if (i % 4 !== 0) places.set(site, alongArc(left, middle, right, i / 8));
    });
  }
  return new Map([...places].map(([site, [x, y, z]]) => [site, { x, y, z }]));
}

/**
 * Ideal places of the 10-10 sites on the unit sphere, by the rule of percentages: midline and
 * coronal line in steps of 10 % of half a turn, the circumference in steps of 10 % at the level of
 * Fpz, T7 and Oz, the rows on arcs through three known sites. Percentages after Oostenveld and
 * Praamstra 2001 and Jurcak et al. 2007 (from memory).
 */
export const sitePositions: ReadonlyMap<string, Position> = derive();
