import fc from 'fast-check';
import seedrandom from 'seedrandom';
import { describe, expect, test } from 'vitest';
import { convolver } from '../../../workers/engine/phase/convolve';
import type { PhaseKernel } from '../../../workers/engine/phase/method';
import { morletKernel } from '../../../workers/engine/phase/morlet';

/** z[i] = sum_m x[i - m] w[m], by its definition. */
function direct(x: Float64Array, kernel: PhaseKernel, at: number): [number, number] {
  let re = 0;
  let im = 0;
  for (let m = -kernel.halfLength; m <= kernel.halfLength; m++) {
    re += x[at - m] * kernel.re[m + kernel.halfLength];
    im += x[at - m] * kernel.im[m + kernel.halfLength];
  }
  return [re, im];
}

function noise(length: number, seed: string): Float64Array {
  const random = seedrandom(seed);
  return Float64Array.from({ length }, () => random() - 0.5);
}

function largestError(rate: number, windowCount: number, offsets: Int32Array): number {
  const kernels = [
    morletKernel(6, 3, rate),
    morletKernel(11.3, 5, rate),
    morletKernel(30, 8, rate),
  ];
  const guard = Math.max(...kernels.map((kernel) => kernel.halfLength)) + 3;
  const length = windowCount + 2 * guard;
  const signals = [noise(length, 'first'), noise(length, 'second')];
  const re = new Float64Array(2 * kernels.length * offsets.length);
  const im = new Float64Array(re.length);
  convolver(kernels, { guard, windowCount, offsets }).transform(signals[0], signals[1], re, im);
  let worst = 0;
  signals.forEach((signal, which) =>
    kernels.forEach((kernel, f) =>
      offsets.forEach((offset, s) => {
        const at = (which * kernels.length + f) * offsets.length + s;
        const [x, y] = direct(signal, kernel, guard + offset);
        worst = Math.max(worst, Math.hypot(re[at] - x, im[at] - y));
      }),
    ),
  );
  return worst;
}

// f64 transforms of at most 2^11 values of size 0.5 and kernels of sum below 200: rounding of the
// order 1e-16 * 200 * log2(2048); 1e-11 leaves two decades.
const tolerance = 1e-11;

describe('convolver', () => {
  test.each<[string, number[]]>([
    ['every sample', Array.from({ length: 200 }, (_, i) => i)],
    ['every eighth sample from the first, by a folded inverse', [0, 8, 16, 64, 160]],
    ['every fourth sample from the fifth, by a folded inverse', [5, 9, 13, 197]],
    ['samples without a common step', [3, 10, 11, 150, 199]],
    ['a single sample', [77]],
  ])('equals the direct sum at %s', (_, offsets) => {
    expect(largestError(160, 200, Int32Array.from(offsets))).toBeLessThan(tolerance);
  });

  test('equals the direct sum for any window, rate and kept samples', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 90 }),
        fc.integer({ min: 70, max: 200 }),
        fc.array(fc.nat(89), { minLength: 1, maxLength: 12 }),
        (windowCount, rate, picks) => {
          const offsets = [...new Set(picks.map((pick) => pick % windowCount))];
          offsets.sort((a, b) => a - b);
          expect(largestError(rate, windowCount, Int32Array.from(offsets))).toBeLessThan(tolerance);
        },
      ),
      { numRuns: 40, seed: 7 },
    );
  });

  test('refuses a kernel that reaches beyond the guard', () => {
    const kernel = morletKernel(10, 5, 100);
    const geometry = { guard: kernel.halfLength - 1, windowCount: 10, offsets: Int32Array.of(0) };
    expect(() => convolver([kernel], geometry)).toThrow(
      'a kernel reaches 32 samples, the guard 31',
    );
  });

  test('refuses signals that are not as long as window and guards', () => {
    const kernel = morletKernel(10, 5, 100);
    const analyser = convolver([kernel], {
      guard: 32,
      windowCount: 10,
      offsets: Int32Array.of(0),
    });
    const short = new Float64Array(73);
    const out = new Float64Array(2);
    expect(() => analyser.transform(short, short, out, out)).toThrow('needs 74 samples');
  });
});
