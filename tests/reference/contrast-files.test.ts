import { execFileSync } from 'node:child_process';
import { rm } from 'node:fs/promises';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { contrast, openDesk, type Desk } from '../engine/contrast/command';

// Outside values: NumPy reads the files that `npm run contrast` leaves, and SciPy's labelling
// (scipy.ndimage.label, 4-neighbourhood) finds the clusters in them again. COMP.

let desk: Desk;
let seen: Seen;

interface Seen {
  shapes: Record<string, number[]>;
  stated: Record<string, number[]>;
  dtypes: Record<string, string>;
  statedDtypes: Record<string, string>;
  differenceOff: number;
  pOff: number;
  maxAdjustedOff: number;
  masses: number[];
  statedMasses: number[];
}

const script = `
import csv, json, sys
import numpy as np
from scipy.ndimage import label
out = sys.argv[1]
result = json.load(open(out + '/result.json'))
maps = {name: np.load(out + '/' + m['file']) for name, m in result['maps'].items()}
m = result['plan']['test']['permutations']
threshold = result['plan']['test']['clusterFormingZ']
low = np.minimum(maps['upper'], maps['lower']).astype(float)
z = maps['z'].astype(float)
reached = np.array([(maps['max-statistic'] >= abs(v) - 1e-5).sum() for v in z.ravel()])
masses = []
for pair in z:
    for sign in (1, -1):
        labels, count = label(sign * pair > threshold)
        masses += [float(abs(pair[labels == i + 1]).sum()) for i in range(count)]
clusters = list(csv.DictReader(open(out + '/clusters.tsv'), delimiter='\\t'))
print(json.dumps({
    'shapes': {k: list(a.shape) for k, a in maps.items()},
    'stated': {k: d['shape'] for k, d in result['maps'].items()},
    'dtypes': {k: a.dtype.str for k, a in maps.items()},
    'statedDtypes': {k: d['dtype'] for k, d in result['maps'].items()},
    'differenceOff': float(abs(maps['observed-a'] - maps['observed-b'] - maps['difference']).max()),
    'pOff': float(abs(np.minimum(1, 2 * (low + 1) / (m + 1)) - maps['p']).max()),
    'maxAdjustedOff': float(abs((reached + 1).reshape(z.shape) / (m + 1) - maps['adjusted-p-max-statistic']).max()),
    'masses': sorted(masses),
    'statedMasses': sorted(float(c['mass']) for c in clusters),
}))`;

beforeAll(async () => {
  desk = await openDesk();
  const out = desk.at('out');
  const { code } = await contrast(
    ...['--plan', desk.at('plan.json'), '--recording', desk.recording, '--out', out],
  );
  expect(code).toBe(0);
  seen = JSON.parse(
    execFileSync('/usr/bin/python3', ['-c', script, out], { encoding: 'utf8' }),
  ) as Seen;
});
afterAll(() => rm(desk.folder, { recursive: true }));

test('NumPy reads every map with the shape and type that result.json states', () => {
  expect(Object.keys(seen.shapes)).toContain('adjusted-p-cluster-mass');
  expect(seen.shapes).toEqual(seen.stated);
  expect(seen.dtypes).toEqual(seen.statedDtypes);
});

test('difference, p and adjusted p follow from the other maps, to f32 rounding', () => {
  expect(seen.differenceOff).toBeLessThan(1e-7);
  expect(seen.pOff).toBeLessThan(1e-7);
  expect(seen.maxAdjustedOff).toBeLessThan(1e-7);
});

test('the clusters of clusters.tsv are those that SciPy finds in the z map', () => {
  expect(seen.masses.length).toBeGreaterThan(0);
  expect(seen.statedMasses.length).toBe(seen.masses.length);
  seen.masses.forEach((mass, i) => expect(seen.statedMasses[i]).toBeCloseTo(mass, 5));
});
