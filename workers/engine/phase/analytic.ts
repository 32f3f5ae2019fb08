import FFT from 'fft.js';
import { powerOfTwo } from './convolve';
import type { EpochGeometry, PhaseAnalyser } from './method';

/**
 * Filters epochs with symmetric real filters, centred (nothing before and after the epoch), and
 * makes them analytic: z = y + i H(y), where H leaves out the negative frequencies of the DFT of the
 * whole epoch with its guard, whatever its length. `filters[f]` holds 2 * halfLength + 1 taps.
 *
 * H is a circular convolution with the epoch's length as its period. Its kernel is known in closed
 * form and odd, and only window samples are asked for, so the same power-of-two transforms do both
 * steps. Filters and H are real, so two signals go through as one complex signal.
 * All arithmetic is f64; cost O(F n log n) for two signals.
 */
export function analyticAnalyser(filters: Float64Array[], geometry: EpochGeometry): PhaseAnalyser {
  const { guard, windowCount, offsets } = geometry;
  const longest = Math.max(...filters.map((taps) => (taps.length - 1) / 2));
  if (longest > guard) {
    throw new RangeError(`analyticAnalyser: a filter reaches ${longest} samples, guard ${guard}`);
  }
  const length = windowCount + 2 * guard;
  const size = powerOfTwo(length + Math.max(longest, windowCount - 1));
  const fft = new FFT(size);
  const gains = filters.map((taps) => filterGain(taps, fft));
  const turn = hilbertGain(length, guard + windowCount - 1, fft);

  const signal = new Float64Array(2 * size);
  const spectrum = new Float64Array(2 * size);
  const product = new Float64Array(2 * size);
  const filtered = new Float64Array(2 * size);
  const turned = new Float64Array(2 * size);

  return {
    kernelSums: new Float64Array(filters.length).fill(1),
    transform(a, b, outRe, outIm) {
      if (a.length !== length || b.length !== length) {
        throw new RangeError(`transform: needs ${length} samples, got ${a.length} and ${b.length}`);
      }
      signal.fill(0);
      for (let i = 0; i < length; i++) {
        signal[2 * i] = a[i];
        signal[2 * i + 1] = b[i];
      }
      fft.transform(spectrum, signal);
      for (let f = 0; f < filters.length; f++) {
        const gain = gains[f];
        for (let k = 0; k < size; k++) {
          product[2 * k] = spectrum[2 * k] * gain[k];
          product[2 * k + 1] = spectrum[2 * k + 1] * gain[k];
        }
        fft.inverseTransform(filtered, product);
        filtered.fill(0, 2 * length);
        fft.transform(product, filtered);
        for (let k = 0; k < size; k++) {
          const re = product[2 * k];
          product[2 * k] = -turn[k] * product[2 * k + 1];
          product[2 * k + 1] = turn[k] * re;
        }
        fft.inverseTransform(turned, product);
        const first = f * offsets.length;
        const second = (filters.length + f) * offsets.length;
        for (let s = 0; s < offsets.length; s++) {
          const at = 2 * (guard + offsets[s]);
          outRe[first + s] = filtered[at];
          outIm[first + s] = turned[at];
          outRe[second + s] = filtered[at + 1];
          outIm[second + s] = turned[at + 1];
        }
      }
    },
  };
}

/** The real spectrum of a centred symmetric filter. */
function filterGain(taps: Float64Array, fft: FFT): Float64Array {
  const half = (taps.length - 1) / 2;
  const centred = new Float64Array(2 * fft.size);
  for (let m = -half; m <= half; m++) centred[2 * ((m + fft.size) % fft.size)] = taps[m + half];
  const spectrum = new Float64Array(2 * fft.size);
  fft.transform(spectrum, centred);
  return Float64Array.from({ length: fft.size }, (_, k) => spectrum[2 * k]);
}

/**
 * The imaginary spectrum of the discrete Hilbert transform of `length` samples,
 * h[n] = (2/L) sum_{0 < k < L/2} sin(2 pi k n / L), for distances up to `reach`: summed,
 * (1/L) (1 - (-1)^n) cot(pi n / L) for an even length and
 * (1/L) (cos(pi n / L) - (-1)^n) / sin(pi n / L) for an odd one.
 */
function hilbertGain(length: number, reach: number, fft: FFT): Float64Array {
  const kernel = new Float64Array(2 * fft.size);
  for (let n = 1; n <= reach; n++) {
    const angle = (Math.PI * n) / length;
    const sign = n % 2 === 0 ? 1 : -1;
    const value =
      length % 2 === 0 ? (1 - sign) / Math.tan(angle) : (Math.cos(angle) - sign) / Math.sin(angle);
    kernel[2 * n] = value / length;
    kernel[2 * (fft.size - n)] = -value / length;
  }
  const spectrum = new Float64Array(2 * fft.size);
  fft.transform(spectrum, kernel);
  return Float64Array.from({ length: fft.size }, (_, k) => spectrum[2 * k + 1]);
}
