import { describe, expect, test } from 'vitest';
import { cyclesOf, morletKernel, morletWidth } from '../../../workers/engine/phase/morlet';

describe('morlet', () => {
  test('cycles run log-spaced from the first to the last frequency', () => {
    const cycles = cyclesOf({ from: 3, to: 12 }, 3);
    [3, 6, 12].forEach((expected, i) => expect(cycles[i]).toBeCloseTo(expected, 12));
  });

  test('a single frequency takes the first number of cycles', () => {
    expect(cyclesOf({ from: 3, to: 12 }, 1)).toEqual([3]);
  });

  test('widths equal published and computed values', () => {
    // reference-values.md section 8, COMP: f = 10, n = 7 gives s .1114085.
    const width = morletWidth(10, 7, 1000);
    expect(width.timeFwhmS).toBeCloseTo(0.2623469, 7);
    expect(width.frequencyFwhmHz).toBeCloseTo(3.3640286, 7);
    // Tallon-Baudry et al. 1996, f0 / sigma_f = 7 (MEM): 2 sigma_t 111.4 ms at 20 Hz, 22.2 at 100 Hz.
    const sigmas = 2 / (2 * Math.sqrt(2 * Math.log(2)));
    expect(1000 * sigmas * morletWidth(20, 7, 1000).timeFwhmS).toBeCloseTo(111.408, 3);
    expect(1000 * sigmas * morletWidth(100, 7, 1000).timeFwhmS).toBeCloseTo(22.282, 3);
    expect(sigmas * morletWidth(20, 7, 1000).frequencyFwhmHz).toBeCloseTo(5.714, 3);
    expect(sigmas * morletWidth(100, 7, 1000).frequencyFwhmHz).toBeCloseTo(28.571, 3);
  });

  test('the envelope is at half its height half a full width from the centre', () => {
    const rate = 10_000;
    const { halfLength, re, im } = morletKernel(10, 7, rate);
    const half = Math.round((morletWidth(10, 7, rate).timeFwhmS / 2) * rate);
    // The nearest sample is at most 50 us off, where the envelope falls by 0.5 % per ms.
    expect(Math.hypot(re[halfLength + half], im[halfLength + half])).toBeCloseTo(0.5, 3);
  });

  test('samples of a kernel equal those computed by NumPy', () => {
    // reference/08_signal.json, morlet_samples_f10_fwhm0.2_fs100, COMP: t = 0, .01, .02, .03.
    const cycles = (2 * Math.PI * 10 * 0.2) / (2 * Math.sqrt(2 * Math.log(2)));
    const { halfLength, re, im } = morletKernel(10, cycles, 100);
    [1, 0.803428705794787, 0.300566908413267, -0.290328496109001].forEach((value, m) => {
      expect(re[halfLength + m]).toBeCloseTo(value, 12);
      expect(re[halfLength - m]).toBeCloseTo(value, 12);
    });
    [0, 0.58372512298022, 0.925049825843174, 0.893539232843523].forEach((value, m) => {
      expect(im[halfLength + m]).toBeCloseTo(value, 10);
      expect(im[halfLength - m]).toBeCloseTo(-value, 10);
    });
  });

  test('the gain at and beside its frequency equals the closed form of a Gaussian', () => {
    // reference/08_signal.json, morlet_gain_f10_fwhm0.2, COMP (closed form).
    const rate = 1000;
    const cycles = (2 * Math.PI * 10 * 0.2) / (2 * Math.sqrt(2 * Math.log(2)));
    const { halfLength, re, im } = morletKernel(10, cycles, rate);
    const gainAt = (hz: number) => {
      let [x, y] = [0, 0];
      for (let m = -halfLength; m <= halfLength; m++) {
        const angle = (-2 * Math.PI * hz * m) / rate;
        const [c, d] = [Math.cos(angle), Math.sin(angle)];
        x += re[m + halfLength] * c - im[m + halfLength] * d;
        y += re[m + halfLength] * d + im[m + halfLength] * c;
      }
      return Math.hypot(x, y) / rate;
    };
    // Ours ends at 4 sd, where the envelope is exp(-8); what lies beyond is below 6.4e-5 of the area.
    const tolerance = 6.4e-5 * 0.2129;
    [
      [10, 0.21289340388624525],
      [11, 0.18463913452677272],
      [12, 0.1204504441172224],
      [14, 0.021814587495],
    ].forEach(([hz, gain]) => expect(Math.abs(gainAt(hz) - gain)).toBeLessThan(tolerance));
  });

  test('the kernel reaches four standard deviations, rounded up to a sample', () => {
    expect(morletKernel(10, 5, 160).halfLength).toBe(Math.ceil((4 * 5 * 160) / (2 * Math.PI * 10)));
  });
});
