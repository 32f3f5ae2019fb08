/** Microvolts in one of each spelling; the case of "V" and "U" varies between writers. */
const MICROVOLTS: Record<string, number> = {
  v: 1e6,
  volt: 1e6,
  volts: 1e6,
  mv: 1e3,
  millivolt: 1e3,
  millivolts: 1e3,
  uv: 1,
  microvolt: 1,
  microvolts: 1,
  nv: 1e-3,
  nanovolt: 1e-3,
  nanovolts: 1e-3,
};

/**
 * Microvolts in one of `unit`, or null when it is no unit of voltage. The micro sign may be
 * either of its two characters, or one of them read as Latin-1 from UTF-8 bytes.
 */
export function microvoltsIn(unit: string): number | null {
  const plain = unit
    .trim()
    .replace(/^(\u00c2\u00b5|\u00ce\u00bc|\u00b5|\u03bc)/, 'u')
    .toLowerCase();
  return MICROVOLTS[plain] ?? null;
}
