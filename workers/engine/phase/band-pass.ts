/** Points at which a long envelope is looked at, some 35 to the turn of the widest band. */
const mostPoints = 1024;

/** One band of a filter: where it lies and how long its filter is. */
export interface Band {
  lowHz: number;
  highHz: number;
  /** Taps to either side of the filter's centre: numtaps = 2 * halfLength + 1. */
  halfLength: number;
}

/**
 * A band's linear-phase filter has 2 * round(1.5 fs / f_low) + 1 taps, three cycles of its lower
 * edge; halves round up.
 */
export function bandOf(lowHz: number, highHz: number, rateHz: number): Band {
  return { lowHz, highHz, halfLength: Math.round((1.5 * rateHz) / lowHz) };
}

/**
 * Taps of a windowed-sinc band-pass (Hamming, symmetric), scaled to a gain of 1 at the middle of the
 * band, as SciPy's `firwin` gives them: `taps[halfLength + m] = taps[halfLength - m]`.
 */
export function bandPass({ lowHz, highHz, halfLength }: Band, rateHz: number): Float64Array {
  const taps = new Float64Array(2 * halfLength + 1);
  const middle = (Math.PI * (lowHz + highHz)) / rateHz;
  let gain = 0;
  for (let m = -halfLength; m <= halfLength; m++) {
    const ideal = lowPass(highHz, m, rateHz) - lowPass(lowHz, m, rateHz);
    const value = ideal * hamming(m / halfLength);
    taps[m + halfLength] = value;
    gain += value * Math.cos(middle * m);
  }
  for (let i = 0; i < taps.length; i++) taps[i] /= gain;
  return taps;
}

function lowPass(cutoffHz: number, m: number, rateHz: number): number {
  const edge = (2 * cutoffHz) / rateHz;
  return m === 0 ? edge : Math.sin(Math.PI * edge * m) / (Math.PI * m);
}

/** The Hamming taper at -1 <= part <= 1 of its half-length. */
function hamming(part: number): number {
  return 0.54 + 0.46 * Math.cos(Math.PI * part);
}

/**
 * The envelope of a band's filter, 1 at its centre: the sinc of half the band's width under the
 * Hamming taper of half-length `reachS`.
 */
export function bandEnvelope(timeS: number, halfWidthHz: number, reachS: number): number {
  if (Math.abs(timeS) > reachS) return 0;
  const angle = 2 * Math.PI * halfWidthHz * timeS;
  const sinc = Math.abs(angle) < 1e-9 ? 1 : Math.sin(angle) / angle;
  return (sinc * hamming(timeS / reachS)) / hamming(0);
}

/** Full width at half maximum of that envelope, seconds. */
export function envelopeFwhmS(halfWidthHz: number, reachS: number): number {
  const firstZero = 1 / (2 * halfWidthHz);
  return (
    2 * halfOf((timeS) => bandEnvelope(timeS, halfWidthHz, reachS), Math.min(reachS, firstZero))
  );
}

/**
 * Full width at half maximum of the gain of a filter of half-length `reachS`, hertz: the cosine sum
 * of its envelope over the samples, or over as many points as tell no difference.
 */
export function gainFwhmHz(halfWidthHz: number, halfLength: number, rateHz: number): number {
  const reachS = halfLength / rateHz;
  const points = Math.max(1, Math.min(halfLength, mostPoints));
  const envelope = Float64Array.from({ length: points + 1 }, (_, i) =>
    bandEnvelope((i / points) * reachS, halfWidthHz, reachS),
  );
  const gain = (hz: number): number => {
    // cos((i + 1) x) = 2 cos(x) cos(i x) - cos((i - 1) x) spares a cosine each.
    const twice = 2 * Math.cos((2 * Math.PI * hz * reachS) / points);
    let before = twice / 2;
    let now = 1;
    let sum = envelope[0] / 2;
    for (let i = 1; i <= points; i++) {
      const next = twice * now - before;
      before = now;
      now = next;
      sum += envelope[i] * now;
    }
    return sum;
  };
  const most = gain(0);
  // Beyond the edge the gain falls within the taper's main lobe, 1 / reach to either side.
  return 2 * halfOf((hz) => gain(hz) / most, halfWidthHz + 1 / reachS);
}

/** Where a function that falls from 1 at 0 to below 1/2 at `end` passes 1/2. */
function halfOf(f: (x: number) => number, end: number): number {
  let low = 0;
  let high = end;
  for (let i = 0; i < 30; i++) {
    const middle = (low + high) / 2;
    if (f(middle) > 0.5) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
