/**
 * Lists the points of a z map beyond a threshold on one side, ascending; returns how many.
 * `points` must have room for all.
 */
export function signedPoints(
  z: Float32Array,
  start: number,
  sign: -1 | 1,
  threshold: number,
  points: Int32Array,
): number {
  let count = 0;
  for (let x = 0; x < points.length; x++) {
    if (z[start + x] * sign > threshold) points[count++] = x;
  }
  return count;
}
