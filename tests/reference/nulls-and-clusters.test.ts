import { execFileSync } from 'node:child_process';
import seedrandom from 'seedrandom';
import { describe, expect, test } from 'vitest';
import { clopperPearson } from '../../workers/engine';
import { adjustFalseDiscovery } from '../../workers/engine/correct/false-discovery';
import { observedClusters } from '../../workers/engine/correct/observed-clusters';
import { sumCrossTerms } from '../../workers/kernels/cross-sums';
import { resultantLengths } from '../../workers/kernels/resultants';
import { drawAll, mapsOf, noise, tinyRun } from '../engine/null/tiny-run';
import { plainAxes } from '../engine/correct/evidence';

// Outside values: NumPy and SciPy (Debian's python3-scipy) at test time. COMP.

function python<T>(script: string, input: unknown): T {
  const text = execFileSync('/usr/bin/python3', ['-c', script], {
    input: JSON.stringify(input),
    maxBuffer: 64 * 1024 * 1024,
    encoding: 'utf8',
  });
  return JSON.parse(text) as T;
}

describe('resultant lengths against NumPy', () => {
  test('are |mean exp(i difference)| to 1e-7 for any count of epochs', () => {
    const random = seedrandom('resultants');
    const groups = [1, 2, 3, 7, 50, 241].map((n) =>
      Array.from({ length: n }, () => [6.3 * random(), 2 * random()]),
    );
    const expected = python<number[]>(
      `import json, sys, numpy as np
print(json.dumps([float(abs(np.exp(1j * (np.array(g)[:, 0] - np.array(g)[:, 1])).mean())) for g in json.load(sys.stdin)]))`,
      groups,
    );
    for (const [i, group] of groups.entries()) {
      const phasors = Float32Array.from(
        [...group.map((pair) => pair[0]), ...group.map((pair) => pair[1])].flatMap((rad) => [
          Math.cos(rad),
          Math.sin(rad),
        ]),
      );
      const starts = Int32Array.from(group, (_, n) => 2 * n);
      const partners = starts.map((start) => start + 2 * group.length);
      const sums = new Float64Array(2);
      const values = new Float64Array(1);
      sumCrossTerms(phasors, starts, partners, sums, {
        epochCount: group.length,
        sampleCount: 1,
        partDistance: 1,
      });
      resultantLengths(sums, group.length, values, 1);
      // Phasors are stored in f32, 6e-8 each.
      expect(Math.abs(values[0] - expected[i])).toBeLessThan(1e-7);
    }
  });
});

describe('clusters against scipy.ndimage.label', () => {
  const script = `import json, sys, numpy as np
from scipy import ndimage
given = json.load(sys.stdin)
out = []
for z in given['maps']:
    z = np.array(z, dtype=np.float32)
    found = []
    for sign in (1, -1):
        labels, count = ndimage.label(sign * z > given['threshold'])
        for label in range(1, count + 1):
            points = np.flatnonzero(labels.ravel() == label)
            found.append([sign, points.tolist(), float(np.abs(z.ravel()[points].astype(float)).sum())])
    out.append(found)
print(json.dumps(out))`;

  test('have the same points, signs and masses on 120 random maps of any shape', () => {
    const random = seedrandom('maps');
    const normal = () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(6.283185307 * random());
    const shapes = [
      [1, 1],
      [1, 17],
      [13, 1],
      [2, 2],
      [7, 9],
      [20, 31],
    ];
    for (const [frequencies, times] of shapes) {
      const maps = Array.from({ length: 20 }, () => {
        // Some smooth, with large clusters of every form; some white.
        const scale = random() < 0.5 ? 3 : 1;
        return Array.from({ length: frequencies }, (_, f) =>
          Array.from({ length: times }, (_t, t) =>
            Math.fround(scale * Math.sin(f / 2) * Math.cos(t / 3) + normal()),
          ),
        );
      });
      const expected = python<[number, number[], number][][]>(script, { maps, threshold: 1 });
      const axes = plainAxes(maps.length, frequencies, times);
      const z = Float32Array.from(maps.flat(2));
      const none = new Float32Array(9);
      const found = observedClusters(axes, { z, maxClusterMass: none }, 'two-sided', 1);
      expected.forEach((clusters, pair) => {
        const ours = found.filter((cluster) => cluster.pair === pair);
        const key = (sign: number, points: number[]) => `${sign}:${points.join()}`;
        const masses = new Map(ours.map((c) => [key(c.sign, c.points), c.mass]));
        expect([...masses.keys()].sort()).toEqual(clusters.map((c) => key(c[0], c[1])).sort());
        for (const [sign, points, mass] of clusters) {
          expect(masses.get(key(sign, points))).toBeCloseTo(mass, 9);
        }
      });
    }
  });

  // reference/09_clusters.json, scipy 1.10.1. COMP
  test.each([
    [
      '5 x 5 identity',
      5,
      [1, 0, 0, 0, 0, 0, 1, 0, 0, 0, 0, 0, 1, 0, 0, 0, 0, 0, 1, 0, 0, 0, 0, 0, 1],
      [1, 1, 1, 1, 1],
    ],
    [
      '4 x 4 checkerboard',
      4,
      [0, 1, 0, 1, 1, 0, 1, 0, 0, 1, 0, 1, 1, 0, 1, 0],
      [1, 1, 1, 1, 1, 1, 1, 1],
    ],
    [
      '4 x 6 mixture',
      6,
      [0, 1, 1, 0, 0, 0, 0, 0, 1, 0, 1, 1, 1, 0, 0, 1, 0, 0, 1, 1, 0, 0, 0, 1],
      [3, 3, 2, 1, 1],
    ],
    ['3 x 3 letter U', 3, [1, 0, 1, 1, 0, 1, 1, 1, 1], [7]],
  ])('%s has the stated sizes', (_, times, mask, sizes) => {
    const axes = plainAxes(1, mask.length / times, times);
    const maps = {
      z: Float32Array.from(mask, (on) => 3 * on),
      maxClusterMass: new Float32Array(9),
    };
    const clusters = observedClusters(axes, maps, 'two-sided', 2);
    expect(clusters.map((cluster) => cluster.size)).toEqual(sizes);
  });
});

describe('Clopper-Pearson intervals against scipy.stats.beta', () => {
  test('agree to 1e-9 from few to 100,000 trials', () => {
    const cases = [0, 1, 5, 19, 49, 500, 998, 999]
      .map((hits) => [hits, 999])
      .concat([
        [0, 19],
        [19, 19],
        [3, 7],
        [1, 100_000],
        [4999, 100_000],
        [99_999, 100_000],
      ]);
    const expected = python<[number, number][]>(
      `import json, sys
from scipy.stats import beta
out = []
for b, m in json.load(sys.stdin):
    low = 0 if b == 0 else beta.ppf(.025, b, m - b + 1)
    high = 1 if b == m else beta.ppf(.975, b + 1, m - b)
    out.append([low, high])
print(json.dumps(out))`,
      cases,
    );
    cases.forEach(([hits, trials], i) => {
      const found = clopperPearson(hits, trials);
      expect(Math.abs(found[0] - expected[i][0])).toBeLessThan(1e-9);
      expect(Math.abs(found[1] - expected[i][1])).toBeLessThan(1e-9);
    });
  });
});

describe('Benjamini-Hochberg against its formula in NumPy', () => {
  test('agrees to 1e-12 on 2000 p with many ties', () => {
    const random = seedrandom('bh');
    const p = Array.from({ length: 2000 }, () => Math.ceil(200 * random() ** 2) / 200);
    const expected = python<number[]>(
      `import json, sys, numpy as np
p = np.array(json.load(sys.stdin))
order = np.argsort(p, kind='stable')
ranked = p[order] * len(p) / np.arange(1, len(p) + 1)
adjusted = np.empty_like(p)
adjusted[order] = np.minimum(np.minimum.accumulate(ranked[::-1])[::-1], 1)
print(json.dumps(adjusted.tolist()))`,
      p,
    );
    adjustFalseDiscovery(Float64Array.from(p)).forEach((value, i) =>
      expect(Math.abs(value - expected[i])).toBeLessThan(1e-12),
    );
  });
});

describe('the label null against a NumPy reading of the definitions', () => {
  test('has the same moments, z and counts for the same relabellings', () => {
    const run = tinyRun(noise('numpy'), {
      siteCount: 2,
      epochsA: 20,
      epochsB: 13,
      test: { permutations: 499 },
    });
    const draws = drawAll(run);
    const maps = mapsOf(run, draws);
    const expected = python<{ mean: number[]; sd: number[]; z: number[]; upper: number[] }>(
      `import json, sys, numpy as np
given = json.load(sys.stdin)
N, nA, X = 33, 20, 8
u = np.array(given['phasors'], dtype=np.float32).astype(float).reshape(2, N, 2, X)
c = (u[0, :, 0] + 1j * u[0, :, 1]) * (u[1, :, 0] - 1j * u[1, :, 1])
masks = np.array(given['masks'], dtype=np.uint8).reshape(499, -1)
bits = ((masks[:, :, None] >> np.arange(7)) & 1).reshape(499, -1)[:, :N].astype(float)
difference = lambda m: abs(m @ c) / m.sum(-1)[..., None] - abs((1 - m) @ c) / (1 - m).sum(-1)[..., None]
null = difference(bits)
observed = difference((np.arange(N) < nA)[None].astype(float))[0]
mean, sd = null.mean(0), null.std(0, ddof=1)
print(json.dumps({'mean': mean.tolist(), 'sd': sd.tolist(), 'z': ((observed - mean) / sd).tolist(),
                  'upper': (null >= observed - 1e-5).sum(0).tolist()}))`,
      {
        phasors: Array.from(new Float32Array(run.phases)),
        masks: Array.from(new Uint8Array(draws)),
      },
    );
    expect([...maps.upper]).toEqual(expected.upper);
    for (let x = 0; x < 8; x++) {
      expect(Math.abs(maps.nullMean[x] - expected.mean[x])).toBeLessThan(1e-7);
      expect(Math.abs(maps.nullSd[x] - expected.sd[x])).toBeLessThan(1e-7);
      expect(Math.abs(maps.z[x] - expected.z[x])).toBeLessThan(1e-5);
    }
  });
});
