/** Petals of a rose; 256 phase codes fall evenly into them. */
export const rosePetals = 32;

/** Phase differences of a condition's epochs at one point. */
export interface Rose {
  /** Epochs a petal; petal i is centred on -pi + i * 2 pi / rosePetals. */
  counts: Uint32Array;
  /** Length of the mean unit vector, 0 to 1. */
  meanLength: number;
  /** Its direction, -pi to pi. */
  meanAngleRad: number;
}

/**
 * Bins the phase differences phi_j - phi_k of the epochs `from .. to - 1` at one point, and gives
 * their mean vector. `phasesJ` and `phasesK` are bytes `[epoch * pointCount + point]`, 256 to the
 * turn. A byte is within pi / 256 of its phase, so the mean length is within 0.0002 of the exact
 * one and the counts of neighbouring petals may differ by epochs on their common border.
 * Throws a RangeError for an empty range of epochs or a point outside.
 */
export function phaseRose(
  phasesJ: Uint8Array,
  phasesK: Uint8Array,
  epochs: { from: number; to: number },
  point: number,
  pointCount: number,
): Rose {
  const last = epochs.to * pointCount;
  if (!(epochs.to > epochs.from) || last > phasesJ.length || last > phasesK.length) {
    throw new RangeError(
      `phaseRose: epochs ${epochs.from} to ${epochs.to} are none, or outside the phases given`,
    );
  }
  if (!(point >= 0 && point < pointCount)) {
    throw new RangeError(`phaseRose: point ${point} is outside 0 to ${pointCount - 1}`);
  }
  const counts = new Uint32Array(rosePetals);
  const codes = 256 / rosePetals;
  let x = 0;
  let y = 0;
  for (let epoch = epochs.from; epoch < epochs.to; epoch++) {
    const at = epoch * pointCount + point;
    const difference = (phasesJ[at]! - phasesK[at]!) & 255;
    const angle = (difference / 256) * 2 * Math.PI;
    x += Math.cos(angle);
    y += Math.sin(angle);
    const fromMinusPi = (difference + 128 + codes / 2) & 255;
    counts[Math.floor(fromMinusPi / codes)]!++;
  }
  const count = epochs.to - epochs.from;
  return { counts, meanLength: Math.hypot(x, y) / count, meanAngleRad: Math.atan2(y, x) };
}
