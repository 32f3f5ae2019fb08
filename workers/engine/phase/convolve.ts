import FFT from 'fft.js';
import type { EpochGeometry, PhaseAnalyser, PhaseKernel } from './method';

/**
 * Convolves epochs with centred kernels, z[i] = sum_m x[i - m] w[m], at the stored samples only.
 *
 * Two real signals share one forward transform. The guard keeps the circular wrap away from every
 * window sample, so the transform need only be as long as the epoch. The epoch is turned round so
 * that the first stored sample lies at index 0; when all stored samples are then multiples of a
 * power of two d, the product is folded modulo n/d and an inverse of length n/d gives exactly them.
 * All arithmetic is f64; cost O(n log n + F (n + (n/d) log(n/d))) for two signals.
 */
export function convolver(kernels: PhaseKernel[], geometry: EpochGeometry): PhaseAnalyser {
  const { guard, windowCount, offsets } = geometry;
  for (const { halfLength } of kernels) {
    if (halfLength > guard) {
      throw new RangeError(`convolver: a kernel reaches ${halfLength} samples, the guard ${guard}`);
    }
  }
  const length = windowCount + 2 * guard;
  const size = powerOfTwo(length);
  const first = offsets[0];
  const step = commonStep(offsets, size);
  const folded = size / step;
  const forward = new FFT(size);
  const inverse = new FFT(folded);
  const spectra = kernels.map((kernel) => kernelSpectrum(kernel, forward, step));

  const signal = new Float64Array(2 * size);
  const spectrum = new Float64Array(2 * size);
  const separated = new Float64Array(4 * size);
  const products = [new Float64Array(2 * folded), new Float64Array(2 * folded)] as const;
  const values = new Float64Array(2 * folded);

  return {
    kernelSums: Float64Array.from(kernels, absoluteSum),
    transform(a, b, outRe, outIm) {
      if (a.length !== length || b.length !== length) {
        throw new RangeError(`transform: needs ${length} samples, got ${a.length} and ${b.length}`);
      }
      signal.fill(0);
      for (let i = 0; i < length; i++) {
        const at = 2 * ((i - guard - first + 2 * size) & (size - 1));
        signal[at] = a[i];
        signal[at + 1] = b[i];
      }
      forward.transform(spectrum, signal);
      separate(spectrum, separated, size);
      for (let f = 0; f < kernels.length; f++) {
        foldProducts(separated, spectra[f], products, size, folded);
        for (let which = 0; which < 2; which++) {
          inverse.inverseTransform(values, products[which]);
          const base = (which * kernels.length + f) * offsets.length;
          for (let s = 0; s < offsets.length; s++) {
            const at = (2 * (offsets[s] - first)) / step;
            outRe[base + s] = values[at];
            outIm[base + s] = values[at + 1];
          }
        }
      }
    },
  };
}

/** Smallest power of two that is at least `length` (and at least 4, the least fft.js can do). */
export function powerOfTwo(length: number): number {
  let size = 4;
  while (size < length) size *= 2;
  return size;
}

/** The largest power of two that divides every distance between stored samples. */
function commonStep(offsets: Int32Array, size: number): number {
  let step = size / 4;
  for (const offset of offsets) {
    while ((offset - offsets[0]) % step !== 0) step /= 2;
  }
  return step;
}

/** Real spectrum of a Hermitian kernel, over `step` to make the folded inverse exact. */
function kernelSpectrum(kernel: PhaseKernel, fft: FFT, step: number): Float64Array {
  const size = fft.size;
  const centred = new Float64Array(2 * size);
  for (let m = -kernel.halfLength; m <= kernel.halfLength; m++) {
    const at = 2 * ((m + size) & (size - 1));
    centred[at] = kernel.re[m + kernel.halfLength];
    centred[at + 1] = kernel.im[m + kernel.halfLength];
  }
  const spectrum = new Float64Array(2 * size);
  fft.transform(spectrum, centred);
  return Float64Array.from({ length: size }, (_, k) => spectrum[2 * k] / step);
}

/**
 * From the spectrum X of a + ib, the spectra A = (X[k] + X*[-k]) / 2 and
 * B = (X[k] - X*[-k]) / 2i as [A re, A im, B re, B im], bin after bin.
 */
function separate(spectrum: Float64Array, out: Float64Array, size: number): void {
  for (let k = 0; k < size; k++) {
    const back = 2 * ((size - k) & (size - 1));
    const re = spectrum[2 * k];
    const im = spectrum[2 * k + 1];
    const backRe = spectrum[back];
    const backIm = spectrum[back + 1];
    out[4 * k] = 0.5 * (re + backRe);
    out[4 * k + 1] = 0.5 * (im - backIm);
    out[4 * k + 2] = 0.5 * (im + backIm);
    out[4 * k + 3] = 0.5 * (backRe - re);
  }
}

/** Products of both separated spectra with a real kernel spectrum, folded modulo `folded`. */
function foldProducts(
  separated: Float64Array,
  kernel: Float64Array,
  products: readonly [Float64Array, Float64Array],
  size: number,
  folded: number,
): void {
  const [a, b] = products;
  for (let r = 0; r < folded; r++) {
    let aRe = 0;
    let aIm = 0;
    let bRe = 0;
    let bIm = 0;
    for (let k = r; k < size; k += folded) {
      const gain = kernel[k];
      aRe += separated[4 * k] * gain;
      aIm += separated[4 * k + 1] * gain;
      bRe += separated[4 * k + 2] * gain;
      bIm += separated[4 * k + 3] * gain;
    }
    a[2 * r] = aRe;
    a[2 * r + 1] = aIm;
    b[2 * r] = bRe;
    b[2 * r + 1] = bIm;
  }
}

function absoluteSum(kernel: PhaseKernel): number {
  let sum = 0;
  for (let i = 0; i < kernel.re.length; i++) sum += Math.hypot(kernel.re[i], kernel.im[i]);
  return sum;
}
