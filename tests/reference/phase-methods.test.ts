import { execFileSync } from 'node:child_process';
import seedrandom from 'seedrandom';
import { describe, expect, test } from 'vitest';
import { analyticAnalyser } from '../../workers/engine/phase/analytic';
import { bandOf, bandPass } from '../../workers/engine/phase/band-pass';
import { guardSamples } from '../../workers/engine/phase/guard';
import { phaseMethod, type PhaseSettings } from '../../workers/engine/phase/registry';

// Outside values: NumPy and SciPy (Debian's python3-scipy) at test time. Short-time Fourier: the Hann
// taper by scipy.signal.windows.hann (by its formula where it ends between samples), the convolution by numpy.convolve. Filter-Hilbert: the filter
// by scipy.signal.firwin, numpy.convolve, scipy.signal.hilbert. Widths are measured by
// numpy.interp on finely sampled kernels and their spectra. COMP.
const script = `
import json, sys
import numpy as np
from scipy import signal
given = json.load(sys.stdin)
rate, settings = given['rate'], given['settings']
stft = settings['method'] == 'stft'

def half(f):
    value, unit = settings['halfWidth']['value'], settings['halfWidth']['unit']
    return value * f if unit == 'share' else value

def filter_of(f, fs, numtaps):
    return signal.firwin(numtaps, [f - half(f), f + half(f)], pass_zero=False, fs=fs)

def taps_of(f):
    return 2 * int(np.floor(1.5 * rate / (f - half(f)) + 0.5)) + 1

def width(curve):
    above = np.flatnonzero(curve >= curve.max() / 2)
    low, high = above[0], above[-1]
    half_height = curve.max() / 2
    rise = np.interp(half_height, curve[[low - 1, low]], [low - 1, low])
    fall = np.interp(-half_height, -curve[[high, high + 1]], [high, high + 1])
    return fall - rise

out = {'re': [], 'im': [], 'halfLength': [], 'timeFwhm': [], 'frequencyFwhm': []}
for row in given['signals']:
    x = np.array(row)
    for f in given['hz']:
        if stft:
            reach = int(settings['taperS'] * rate // 2)
            m = np.arange(-reach, reach + 1)
            taper = 0.5 + 0.5 * np.cos(2 * np.pi * m / rate / settings['taperS'])
            if settings['taperS'] * rate % 2 == 0:
                taper = signal.windows.hann(2 * reach + 1, sym=True)
            w = np.exp(2j * np.pi * f * m / rate) * taper
            z = np.convolve(x, w, mode='full')[reach:reach + len(x)]
        else:
            taps = taps_of(f)
            y = np.convolve(x, filter_of(f, rate, taps), mode='full')[taps // 2:taps // 2 + len(x)]
            z = signal.hilbert(y)
        z = z[given['guard']:][given['offsets']]
        out['re'] += z.real.tolist()
        out['im'] += z.imag.tolist()
for f in given['hz']:
    if stft:
        reach, fine = int(settings['taperS'] * rate // 2), 8 * rate
        envelope = signal.windows.hann(2 * int(settings['taperS'] * fine / 2) + 1, sym=True)
    else:
        reach, fine = taps_of(f) // 2, 8 * rate
        # The same filter at a higher rate; its low-pass twin is its envelope.
        t = np.arange(-8 * reach, 8 * reach + 1) / fine
        envelope = np.sinc(2 * half(f) * t) * signal.windows.hamming(len(t), sym=True)
    out['halfLength'].append(reach)
    out['timeFwhm'].append(width(abs(envelope)) / fine)
    padded = 2 ** 18
    if stft:
        spectrum, step = np.fft.fftshift(abs(np.fft.fft(envelope, padded))), fine / padded
    else:
        hz, response = signal.freqz(filter_of(f, rate, 2 * reach + 1), worN=padded, fs=rate)
        spectrum, step = abs(response), hz[1]
    out['frequencyFwhm'].append(width(spectrum) * step)
json.dump(out, sys.stdout)
`;

interface Outside {
  re: number[];
  im: number[];
  halfLength: number[];
  timeFwhm: number[];
  frequencyFwhm: number[];
}

function python<T>(code: string, given: unknown): T {
  const options = { input: JSON.stringify(given), encoding: 'utf8' } as const;
  return JSON.parse(execFileSync('/usr/bin/python3', ['-c', code], options)) as T;
}

/** A random walk, whose spectrum falls as a real recording's does. */
function walk(seed: string, length: number): Float64Array {
  const random = seedrandom(seed);
  let value = 0;
  return Float64Array.from({ length }, () => {
    value += random() - 0.5;
    return value;
  });
}

const rate = 250;
const hz = [4, 7.5, 13, 31, 60];
const frequencies = { kind: 'list' as const, hz };
const cases: [string, PhaseSettings, number][] = [
  ['short-time Fourier', { method: 'stft', frequencies, taperS: 0.48 }, 301],
  [
    'short-time Fourier that ends between samples',
    { method: 'stft', frequencies, taperS: 0.301 },
    300,
  ],
  [
    'filter-Hilbert by share, odd epoch',
    { method: 'filter-hilbert', frequencies, halfWidth: { value: 0.2, unit: 'share' } },
    301,
  ],
  [
    'filter-Hilbert by hertz, even epoch',
    { method: 'filter-hilbert', frequencies, halfWidth: { value: 2, unit: 'Hz' } },
    300,
  ],
  [
    'filter-Hilbert of a wide band',
    { method: 'filter-hilbert', frequencies, halfWidth: { value: 0.8, unit: 'share' } },
    302,
  ],
];

describe.each(cases)('%s against SciPy', (_, settings, windowCount) => {
  const method = phaseMethod(settings.method);
  const guard = guardSamples(settings, hz, rate);
  const offsets = Int32Array.from([0, 13, 50, 51, 200, windowCount - 1]);
  const signals = ['one', 'two'].map((seed) => walk(seed, windowCount + 2 * guard));
  const outside = python<Outside>(script, {
    ...{ rate, hz, settings, guard },
    offsets: [...offsets],
    signals: signals.map((signal) => [...signal]),
  });
  const widths = method.widths(settings, hz, rate);

  test('z is equal at every kept sample', () => {
    const re = new Float64Array(2 * hz.length * offsets.length);
    const im = new Float64Array(re.length);
    method
      .analyser(settings, hz, rate, { guard, windowCount, offsets })
      .transform(signals[0], signals[1], re, im);
    const largest = Math.max(...outside.re.map(Math.abs));
    // f64 on both sides, sums over about 1000 values; 1e-12 of the largest leaves three decades.
    re.forEach((value, i) => {
      expect(Math.abs(value - outside.re[i])).toBeLessThan(1e-12 * largest);
      expect(Math.abs(im[i] - outside.im[i])).toBeLessThan(1e-12 * largest);
    });
  });

  test('kernels reach as far, and the guard as far as the longest', () => {
    expect(widths.map((width) => width.halfLength)).toEqual(outside.halfLength);
    expect(guard).toBe(Math.max(...outside.halfLength));
  });

  test('widths at half maximum equal those measured on the sampled kernel', () => {
    widths.forEach((width, i) => {
      // A continuous kernel against one sampled at the recording's rate: half a percent in time.
      // In frequency the image of a low band at negative frequencies adds up to 2 percent.
      expect(Math.abs(width.timeFwhmS / outside.timeFwhm[i] - 1)).toBeLessThan(0.005);
      expect(Math.abs(width.frequencyFwhmHz / outside.frequencyFwhm[i] - 1)).toBeLessThan(0.03);
    });
  });

  test('the kernel drawn is 1 at its centre and nothing outside its reach', () => {
    for (const [i, shape] of method.shapes(settings, hz).entries()) {
      expect(shape(0)).toBeCloseTo(1, 12);
      expect(Math.abs(shape((widths[i].halfLength + 1) / rate))).toBe(0);
    }
  });
});

describe('values of signal processing', () => {
  test('the analytic signal of 16 samples has the known imaginary part', () => {
    // reference-values.md section 8, computed by SciPy's hilbert. COMP.
    const known = [-0.324695884612, 1.133421004953, 1.078859928039, -0.873192372445];
    const turn = (2 * Math.PI) / 16;
    const x = Float64Array.from(
      { length: 16 },
      (_, n) => Math.cos(3 * n * turn) + 0.5 * Math.sin(5 * n * turn) + (0.25 * n) / 16,
    );
    const geometry = { guard: 0, windowCount: 16, offsets: Int32Array.from(x, (_, i) => i) };
    const re = new Float64Array(32);
    const im = new Float64Array(32);
    analyticAnalyser([Float64Array.of(1)], geometry).transform(x, x, re, im);
    known.forEach((value, i) => expect(im[i]).toBeCloseTo(value, 11));
    x.forEach((value, i) => expect(re[i]).toBeCloseTo(value, 14));
  });

  test('a band-pass of 31 taps has the known gains', () => {
    // reference-values.md section 8: firwin(31, [8, 13], pass_zero = False, fs = 100). COMP.
    const taps = bandPass({ lowHz: 8, highHz: 13, halfLength: 15 }, 100);
    const gain = (at: number) =>
      Math.abs(
        taps.reduce((sum, tap, i) => sum + tap * Math.cos((2 * Math.PI * at * (i - 15)) / 100), 0),
      );
    const known = { 0: 0.0087986, 8: 0.6932545, 10.5: 1, 13: 0.6934002, 30: 0.0019313 };
    for (const [at, value] of Object.entries(known)) expect(gain(Number(at))).toBeCloseTo(value, 6);
  });

  test('a filter has 2 round(1.5 fs / f_low) + 1 taps, halves up', () => {
    expect(bandOf(8, 13, 100).halfLength).toBe(19);
    expect(bandOf(6, 9, 250).halfLength).toBe(63);
  });

  test('a Morlet wavelet of 7 cycles at 10 Hz has the known widths', () => {
    // reference-values.md section 8. COMP.
    const [width] = phaseMethod('morlet').widths(
      { method: 'morlet', frequencies, cycles: { from: 7, to: 7 } },
      [10],
      1000,
    );
    expect(width.timeFwhmS).toBeCloseTo(0.2623469, 7);
    expect(width.frequencyFwhmHz).toBeCloseTo(3.3640286, 7);
  });
});

test('all methods give the phase of a pure wave', () => {
  // A pure wave: all methods must give its phase; this links their conventions to each other.
  const at = 13;
  const all: PhaseSettings[] = [
    { method: 'morlet', frequencies, cycles: { from: 6, to: 6 } },
    { method: 'stft', frequencies, taperS: 0.5 },
    { method: 'filter-hilbert', frequencies, halfWidth: { value: 0.2, unit: 'share' } },
  ];
  for (const settings of all) {
    const guard = guardSamples(settings, [at], rate);
    const geometry = { guard, windowCount: 250, offsets: Int32Array.of(100, 125, 150) };
    const wave = Float64Array.from({ length: 250 + 2 * guard }, (_, i) =>
      Math.cos((2 * Math.PI * at * (i - guard)) / rate + 0.4),
    );
    const re = new Float64Array(6);
    const im = new Float64Array(6);
    phaseMethod(settings.method)
      .analyser(settings, [at], rate, geometry)
      .transform(wave, wave, re, im);
    geometry.offsets.forEach((offset, i) => {
      const expected = (2 * Math.PI * at * offset) / rate + 0.4;
      const error = Math.atan2(im[i], re[i]) - expected;
      expect(Math.abs(Math.atan2(Math.sin(error), Math.cos(error)))).toBeLessThan(0.01);
    });
  }
});
