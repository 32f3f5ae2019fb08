/**
 * Subtracts the reference from every signal, sample by sample, in place. `reference` are the
 * signals whose mean is the reference; they may be among `signals`.
 */
export function rereference(signals: Float64Array[], reference: Float64Array[]): void {
  if (signals.length === 0 || reference.length === 0) return;
  const mean = new Float64Array(signals[0].length);
  for (const part of reference) {
    for (let i = 0; i < mean.length; i++) mean[i] += part[i];
  }
  for (let i = 0; i < mean.length; i++) mean[i] /= reference.length;
  for (const signal of signals) {
    for (let i = 0; i < mean.length; i++) signal[i] -= mean[i];
  }
}

/**
 * Removes a signal's mean, or its least-squares line, in place. A constant signal becomes exactly
 * zero, so that rounding is never taken for a signal.
 */
export function detrend(signal: Float64Array, kind: 'mean' | 'line'): void {
  const n = signal.length;
  if (isConstant(signal)) {
    signal.fill(0);
    return;
  }
  let mean = 0;
  for (let i = 0; i < n; i++) mean += signal[i];
  mean /= n;
  let slope = 0;
  const centre = (n - 1) / 2;
  if (kind === 'line') {
    let product = 0;
    for (let i = 0; i < n; i++) product += (i - centre) * (signal[i] - mean);
    slope = product / ((n * (n * n - 1)) / 12);
  }
  for (let i = 0; i < n; i++) signal[i] -= mean + slope * (i - centre);
}

/** Largest minus smallest of `count` values from `from`; NaN when one of them is. */
export function peakToPeak(signal: Float64Array, from: number, count: number): number {
  let least = Infinity;
  let most = -Infinity;
  for (let i = from; i < from + count; i++) {
    const value = signal[i];
    if (Number.isNaN(value)) return NaN;
    if (value < least) least = value;
    if (value > most) most = value;
  }
  return most - least;
}

/** The error for a site without any signal: named before a run as well as in it. */
export function flatError(site: string, where: string): RangeError {
  return new RangeError(
    `${site} is flat in ${where}, so it has no phase. Leave the site out, or set a limit for flat epochs.`,
  );
}

export function isConstant(signal: Float64Array): boolean {
  for (let i = 1; i < signal.length; i++) if (signal[i] !== signal[0]) return false;
  return true;
}
