/** A source of numbers in [0, 1), seeded by whoever makes it. */
export type Uniform = () => number;

/** Standard normal numbers by the polar method (Marsaglia and Bray 1964). */
export function normals(uniform: Uniform): () => number {
  let spare: number | null = null;
  return () => {
    if (spare !== null) {
      const value = spare;
      spare = null;
      return value;
    }
    let x: number, y: number, s: number;
    do {
      x = 2 * uniform() - 1;
      y = 2 * uniform() - 1;
      s = x * x + y * y;
    } while (s >= 1 || s === 0);
    const factor = Math.sqrt((-2 * Math.log(s)) / s);
    spare = y * factor;
    return x * factor;
  };
}

/**
 * Noise whose power falls as 1/f, of unit standard deviation: first-order processes with time
 * constants an octave apart and equal variance.
 */
export function pinkNoise(count: number, rateHz: number, normal: () => number): Float64Array {
  const corners: number[] = [];
  for (let hz = 0.5; hz < rateHz / 2; hz *= 2) corners.push(hz);
  const out = new Float64Array(count);
  for (const hz of corners) {
    const keep = Math.exp((-2 * Math.PI * hz) / rateHz);
    const drive = Math.sqrt((1 - keep * keep) / corners.length);
    let state = normal() / Math.sqrt(corners.length);
    for (let i = 0; i < count; i++) {
      out[i] += state;
      state = keep * state + drive * normal();
    }
  }
  return out;
}

/**
 * A rhythm around `hz` that waxes and wanes and loses its phase within about `memoryS` seconds:
 * a second-order autoregressive process scaled to unit standard deviation.
 */
export function rhythm(
  count: number,
  rateHz: number,
  options: { hz: number; memoryS: number; normal: () => number },
): Float64Array {
  const radius = Math.exp(-1 / (options.memoryS * rateHz));
  const first = 2 * radius * Math.cos((2 * Math.PI * options.hz) / rateHz);
  const second = -radius * radius;
  // Stationary variance of an AR(2) process driven by unit noise (Box and Jenkins 1976, 3.2.28).
  const variance = (1 - second) / ((1 + second) * ((1 - second) ** 2 - first * first));
  const drive = 1 / Math.sqrt(variance);
  const settle = Math.ceil(5 * options.memoryS * rateHz);
  const out = new Float64Array(count);
  let one = 0;
  let two = 0;
  for (let i = -settle; i < count; i++) {
    const value = first * one + second * two + drive * options.normal();
    if (i >= 0) out[i] = value;
    two = one;
    one = value;
  }
  return out;
}
