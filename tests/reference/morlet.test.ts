import { execFileSync } from 'node:child_process';
import seedrandom from 'seedrandom';
import { describe, expect, test } from 'vitest';
import { guardSamples } from '../../workers/engine/phase/guard';
import { morlet } from '../../workers/engine/phase/morlet';
import type { PhaseSettings } from '../../workers/engine/phase/registry';

// Outside values: SciPy (Debian's python3-scipy) at test time; the wavelet is written in NumPy from
// its formula, the convolution is scipy.signal.fftconvolve, the widths are measured by
// scipy.signal.peak_widths on a finely sampled envelope. COMP.
const script = `
import json, sys
import numpy as np
from scipy import signal
given = json.load(sys.stdin)
rate = given['rate']
x = [np.array(row) for row in given['signals']]
cycles = np.geomspace(given['from'], given['to'], len(given['hz']))
out = {'re': [], 'im': [], 'halfLength': [], 'timeFwhm': [], 'frequencyFwhm': []}
for row in x:
    for f, n in zip(given['hz'], cycles):
        s = n / (2 * np.pi * f)
        half = int(np.ceil(4 * s * rate))
        t = np.arange(-half, half + 1) / rate
        w = np.exp(2j * np.pi * f * t) * np.exp(-t ** 2 / (2 * s ** 2))
        z = signal.fftconvolve(row, w, mode='full')[half:half + len(row)]
        z = z[given['guard']:][given['offsets']]
        out['re'] += z.real.tolist()
        out['im'] += z.imag.tolist()
for f, n in zip(given['hz'], cycles):
    s = n / (2 * np.pi * f)
    out['halfLength'].append(int(np.ceil(4 * s * rate)))
    fine = 200 / s
    t = np.arange(-8 * s, 8 * s, 1 / fine)
    w = np.exp(2j * np.pi * f * t) * np.exp(-t ** 2 / (2 * s ** 2))
    peak = signal.peak_widths(abs(w), [np.argmax(abs(w))])[0][0]
    out['timeFwhm'].append(peak / fine)
    padded = 2 ** 20
    power = np.fft.fftshift(abs(np.fft.fft(w * np.exp(-2j * np.pi * f * t), padded)))
    peak = signal.peak_widths(power, [np.argmax(power)])[0][0]
    out['frequencyFwhm'].append(peak * fine / padded)
json.dump(out, sys.stdout)
`;

interface FromSciPy {
  re: number[];
  im: number[];
  halfLength: number[];
  timeFwhm: number[];
  frequencyFwhm: number[];
}

const rate = 250;
const hz = [4, 7.5, 13, 31, 60];
const settings = {
  method: 'morlet' as const,
  frequencies: { kind: 'list' as const, hz },
  cycles: { from: 3, to: 9 },
} satisfies PhaseSettings;
const windowCount = 301;
const offsets = Int32Array.from([0, 13, 50, 51, 200, 300]);
const guard = guardSamples(settings, hz, rate);

/** A random walk, whose spectrum falls as a real recording's does. */
function walk(seed: string): Float64Array {
  const random = seedrandom(seed);
  let value = 0;
  const samples = Float64Array.from({ length: windowCount + 2 * guard }, () => {
    value += random() - 0.5;
    return value;
  });
  return samples;
}

describe('Morlet against SciPy', () => {
  const signals = [walk('one'), walk('two')];
  const given = JSON.stringify({
    rate,
    hz,
    from: settings.cycles.from,
    to: settings.cycles.to,
    guard,
    offsets: Array.from(offsets),
    signals: signals.map((signal) => Array.from(signal)),
  });
  const outside = JSON.parse(
    execFileSync('/usr/bin/python3', ['-c', script], { input: given, encoding: 'utf8' }),
  ) as FromSciPy;

  test('the convolution is equal at every kept sample', () => {
    const re = new Float64Array(2 * hz.length * offsets.length);
    const im = new Float64Array(re.length);
    morlet
      .analyser(settings, hz, rate, { guard, windowCount, offsets })
      .transform(signals[0], signals[1], re, im);
    const largest = Math.max(...outside.re.map(Math.abs));
    // Both are f64 transforms of about 1000 values; 1e-12 of the largest leaves three decades.
    re.forEach((value, i) => {
      expect(Math.abs(value - outside.re[i])).toBeLessThan(1e-12 * largest);
      expect(Math.abs(im[i] - outside.im[i])).toBeLessThan(1e-12 * largest);
    });
  });

  test('kernels reach as far', () => {
    const widths = morlet.widths(settings, hz, rate);
    expect(widths.map((width) => width.halfLength)).toEqual(outside.halfLength);
  });

  test('widths at half maximum equal those measured on the sampled kernel', () => {
    const widths = morlet.widths(settings, hz, rate);
    widths.forEach((width, i) => {
      // Linear interpolation between samples 1/200 sd apart (time) and 1/5000 sd (frequency).
      expect(width.timeFwhmS / outside.timeFwhm[i]).toBeCloseTo(1, 4);
      expect(width.frequencyFwhmHz / outside.frequencyFwhm[i]).toBeCloseTo(1, 3);
    });
  });
});
