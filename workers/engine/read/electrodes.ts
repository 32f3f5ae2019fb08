import type { SidecarElectrode } from './bids';
import type { Notice } from './edf-error';
import { fitSphere, type Point } from './sphere';
import { sitePositions, type Position } from './positions';
import { siteOf } from './sites';

export interface ProjectedElectrodes {
  /** On the unit sphere, by the electrode's name as the file has it. */
  positions: Map<string, Position>;
  notices: Notice[];
}

/**
 * Brings measured electrode places onto the unit sphere: a sphere is fitted to them, and each is
 * seen from its centre, so that the file's unit and origin do not matter. The file's axes are
 * turned by right angles to where the named 10-10 sites agree best with their ideal places (at
 * least four are needed; otherwise x is taken to the right ear, y to the nose, z up).
 */
export function projectElectrodes(electrodes: SidecarElectrode[]): ProjectedElectrodes {
  const notices: Notice[] = [];
  const placed = electrodes.filter(
    (electrode): electrode is { name: string; place: Point } => electrode.place !== null,
  );
  const { centre, radius, spread } = fitSphere(placed.map((electrode) => electrode.place));
  if (spread > 0.2) {
    notices.push({
      code: 'electrodes-not-on-sphere',
      message:
        'The electrode positions do not lie near a sphere; positions on the head map are rough.',
    });
  }
  const seen = placed.flatMap(({ name, place }) => {
    const direction = place.map((value, i) => value - centre[i]) as Point;
    const length = Math.hypot(...direction);
    // A place at the centre itself has no direction.
    if (length < 1e-6 * radius) return [];
    return [{ name, direction: direction.map((value) => value / length) as Point }];
  });
  const turn = bestTurn(seen);
  if (turn !== TURNS[0]) {
    notices.push({
      code: 'electrodes-turned',
      message:
        'The axes of the electrode positions were turned to match the named sites ' +
        '(x to the right ear, y to the nose, z up).',
    });
  }
  const positions = new Map(seen.map(({ name, direction }) => [name, turned(direction, turn)]));
  return { positions, notices };
}

/** Which of the file's axes, with which sign, becomes x, y and z. */
type Turn = { axis: number; sign: number }[];

/** The 24 turns by right angles, the identity first. */
const TURNS: Turn[] = [];
for (const [a, b, c] of [
  [0, 1, 2],
  [1, 2, 0],
  [2, 0, 1],
  [1, 0, 2],
  [0, 2, 1],
  [2, 1, 0],
]) {
  const parity = (b - a + 3) % 3 === 1 ? 1 : -1;
  for (const signs of [0, 1, 2, 3, 4, 5, 6, 7]) {
    const [x, y, z] = [0, 1, 2].map((bit) => (signs & (1 << bit) ? -1 : 1));
    if (x * y * z !== parity) continue;
    TURNS.push([
      { axis: a, sign: x },
      { axis: b, sign: y },
      { axis: c, sign: z },
    ]);
  }
}

function turned(direction: Point, turn: Turn): Position {
  const [x, y, z] = turn.map(({ axis, sign }) => sign * direction[axis]);
  return { x, y, z };
}

function bestTurn(seen: { name: string; direction: Point }[]): Turn {
  const known = seen.flatMap(({ name, direction }) => {
    const ideal = sitePositions.get(siteOf(name) ?? '');
    return ideal ? [{ direction, ideal }] : [];
  });
  if (known.length < 4) return TURNS[0];
  let best = TURNS[0];
  let bestAgreement = -Infinity;
  for (const turn of TURNS) {
    let agreement = 0;
    for (const { direction, ideal } of known) {
      const place = turned(direction, turn);
      agreement += place.x * ideal.x + place.y * ideal.y + place.z * ideal.z;
    }
    if (agreement > bestAgreement + 1e-9) {
      best = turn;
      bestAgreement = agreement;
    }
  }
  return best;
}
