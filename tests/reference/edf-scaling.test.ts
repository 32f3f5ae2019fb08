import { execFileSync } from 'node:child_process';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { bytesOf, openEdf, writeEdf } from '../../workers/engine/read';

/**
 * The oracle: NumPy (Debian's python3-numpy, at test time) reads the same bytes by the layout of
 * Kemp et al. 1992 and scales by (d - dmin) * (pmax - pmin) / (dmax - dmin) + pmin in float64.
 */
const ORACLE = `
import sys, json, numpy as np
b = open(sys.argv[1], 'rb').read()
t = lambda o, w: b[o:o+w].decode('latin1').strip()
ns = int(t(252, 4)); records = int(t(236, 8)); at = lambda before, i, w: 256 + ns * before + i * w
spr = [int(t(at(216, i, 8), 8)) for i in range(ns)]
data = np.frombuffer(b, '<i2', offset=256 * (1 + ns)).reshape(records, sum(spr)).astype(np.float64)
out = []; first = 0
for i in range(ns):
    block = data[:, first:first+spr[i]].ravel(); first += spr[i]
    if t(at(0, i, 16), 16) == 'EDF Annotations': continue
    pmin, pmax, dmin, dmax = [float(t(at(o, i, 8), 8)) for o in (104, 112, 120, 128)]
    uv = {'uV': 1.0, 'mV': 1e3, 'V': 1e6, 'nV': 1e-3}.get(t(at(96, i, 8), 8), 1.0)
    out.append((((block - dmin) * (pmax - pmin) / (dmax - dmin) + pmin) * uv).tolist())
json.dump(out, sys.stdout)
`;

describe('EDF scaling', () => {
  let folder = '';
  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), 'edf-scaling-'));
  });
  afterAll(() => rm(folder, { recursive: true }));

  it('equals NumPy’s reading of the same bytes to 1e-12 of the physical range', async () => {
    const limits = [
      ['uV', -3276.8, 3276.7, 7],
      ['mV', -0.5, 12.25, 16],
      ['V', -1e-4, 2e-4, 5],
      ['nV', -5e5, 5e5, 16],
      ['degC', 34, 40.2, 1],
    ] as const;
    const signals = limits.map(([unit, physicalMin, physicalMax, samplesPerRecord], s) => ({
      label: `S${s}`,
      unit,
      physicalMin,
      physicalMax,
      samplesPerRecord,
      // Beyond both limits at times, so that the clipped ends are covered.
      samples: Float64Array.from({ length: samplesPerRecord * 9 }, (_, i) => {
        const middle = (physicalMin + physicalMax) / 2;
        return middle + 0.55 * (physicalMax - physicalMin) * Math.sin(i * 1.7 + s);
      }),
    }));
    const bytes = writeEdf({
      startedAt: '2024-01-01T00:00:00',
      recordDurationS: 0.5,
      signals,
      annotations: [{ onsetS: 1, text: 'x' }],
    });
    const path = join(folder, 'scaling.edf');
    await writeFile(path, bytes);
    const printed = execFileSync('/usr/bin/python3', ['-c', ORACLE, path], { encoding: 'utf8' });
    const oracle = JSON.parse(printed) as number[][];
    const file = await openEdf(bytesOf(bytes));
    expect(oracle).toHaveLength(file.channels.length);
    for (const [i, channel] of file.channels.entries()) {
      const values = await file.readSamples(channel, file.segments[0], 0, oracle[i].length);
      // Two roundings may fall differently: a few units in the last place of the largest term.
      const range = Math.abs(channel.scale!.perStep) * 65535;
      values.forEach((value, k) => {
        expect(Math.abs(value - oracle[i][k]), `${channel.label}[${k}]`).toBeLessThan(
          1e-12 * range,
        );
      });
    }
  });

  it('gives the values that the linear rule gives by hand', async () => {
    // reference-values section 10, scaling: computed with NumPy from the rule (COMP).
    const cases = [
      { limits: [-500, 500, -2048, 2047], digital: 0, physical: 0.12210012210010746 },
      { limits: [-100, 100, -2048, 2047], digital: 1000, physical: 48.864468864468876 },
      { limits: [500, -500, -2048, 2047], digital: 2047, physical: -500 },
      { limits: [34, 40, -2048, 2047], digital: 0, physical: 37.000732600732604 },
      { limits: [-3276.8, 3276.7, -32768, 32767], digital: 12345, physical: 1234.5 },
    ];
    for (const { limits, digital, physical } of cases) {
      const bytes = writeEdf({
        startedAt: '2024-01-01T00:00:00',
        recordDurationS: 1,
        signals: [
          {
            label: 'A',
            unit: 'uV',
            physicalMin: -1,
            physicalMax: 1,
            samplesPerRecord: 1,
            samples: new Float32Array(1),
          },
        ],
        annotations: [],
      });
      limits.forEach((limit, i) => {
        const text = String(limit).padEnd(8);
        bytes.set(new TextEncoder().encode(text), 256 + 2 * (104 + 8 * i));
      });
      new DataView(bytes.buffer).setInt16(256 * 3, digital, true);
      const file = await openEdf(bytesOf(bytes));
      const [value] = await file.readSamples(file.channels[0], file.segments[0], 0, 1);
      expect(Math.abs(value - physical)).toBeLessThan(1e-10);
    }
  });
});
