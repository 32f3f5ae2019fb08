import { execFileSync } from 'node:child_process';
import seedrandom from 'seedrandom';
import { expect, test } from 'vitest';
import { adjustFalseDiscovery } from '../../workers/engine/correct/false-discovery';
import { harmonic } from '../../workers/engine/correct/benjamini-yekutieli';
import { componentSizes } from '../../workers/engine/correct/network-components';
import { enhancedMap } from '../../workers/engine/correct/threshold-free-enhancement';
import { plainAxes, plainMaps } from '../engine/correct/evidence';

// Outside values: NumPy and SciPy (Debian's python3-scipy) at test time. COMP.

function python<T>(script: string, input: unknown): T {
  const text = execFileSync('/usr/bin/python3', ['-c', script], {
    input: JSON.stringify(input),
    maxBuffer: 64 * 1024 * 1024,
    encoding: 'utf8',
  });
  return JSON.parse(text) as T;
}

test('enhancement equals the sum over heights with scipy.ndimage.label at each', () => {
  const random = seedrandom('enhance');
  const normal = () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(6.283185307 * random());
  for (const [frequencies, times] of [
    [1, 1],
    [1, 23],
    [17, 1],
    [6, 9],
    [15, 20],
  ]) {
    const maps = Array.from({ length: 6 }, (_, i) =>
      Array.from({ length: frequencies }, (_f, f) =>
        Array.from({ length: times }, (_t, t) =>
          Math.fround((i % 2) * 3 * Math.sin(f / 2) * Math.cos(t / 3) + normal()),
        ),
      ),
    );
    const expected = python<number[][]>(
      `import json, sys, numpy as np
from scipy import ndimage
E, H, step = .5, 2, .1
out = []
for z in json.load(sys.stdin):
    z = np.array(z)
    total = np.zeros(z.shape)
    for sign in (1, -1):
        level = 1
        while (sign * z >= level * step).any():
            labels, count = ndimage.label(sign * z >= level * step)
            extent = np.bincount(labels.ravel())
            extent[0] = 0
            total += extent[labels] ** E * (level * step) ** H * step
            level += 1
    out.append(total.ravel().tolist())
print(json.dumps(out))`,
      maps,
    );
    const axes = plainAxes(maps.length, frequencies, times);
    const found = enhancedMap({
      axes,
      maps: plainMaps(19, { z: maps.flat(2) }),
      tail: 'two-sided',
    });
    expected.flat().forEach((value, x) => expect(Math.abs(found[x] - value)).toBeLessThan(1e-9));
  }
});

test('network components equal scipy.sparse.csgraph.connected_components on random graphs', () => {
  const random = seedrandom('graphs');
  const sites = 20;
  const pairs: [number, number][] = [];
  for (let j = 0; j < sites; j++) for (let k = j + 1; k < sites; k++) pairs.push([j, k]);
  const axes = {
    ...plainAxes(1, 1, 1),
    sites: Array.from({ length: sites }, (_, i) => `S${i}`),
    pairs,
  };
  const graphs = [0.02, 0.05, 0.1, 0.3].flatMap((share) =>
    Array.from({ length: 5 }, () => pairs.flatMap((_, i) => (random() < share ? [i] : []))),
  );
  const expected = python<number[][]>(
    `import json, sys, numpy as np
from scipy.sparse import coo_matrix
from scipy.sparse.csgraph import connected_components
given = json.load(sys.stdin)
pairs = np.array(given['pairs'])
out = []
for graph in given['graphs']:
    edges = pairs[graph].reshape(-1, 2)
    matrix = coo_matrix((np.ones(len(edges)), (edges[:, 0], edges[:, 1])), shape=(20, 20))
    labels = connected_components(matrix, directed=False)[1]
    counts = np.bincount(labels[edges[:, 0]], minlength=20)
    out.append(counts[labels[edges[:, 0]]].tolist())
print(json.dumps(out))`,
    { pairs, graphs },
  );
  graphs.forEach((graph, i) => expect([...componentSizes(axes, graph)]).toEqual(expected[i]));
});

test('Benjamini-Yekutieli equals its formula in NumPy, and claims 3 of the published 15', () => {
  // Benjamini and Hochberg 1995, table: BY 3 at .05 (reference-values, section 4). COMP
  const published = [
    0.0001, 0.0004, 0.0019, 0.0095, 0.0201, 0.0278, 0.0298, 0.0344, 0.0459, 0.324, 0.4262, 0.5719,
    0.6528, 0.759, 1,
  ];
  const expected = python<number[]>(
    `import json, sys, numpy as np
p = np.array(json.load(sys.stdin))
m = len(p)
ranked = p * m / np.arange(1, m + 1) * (1 / np.arange(1, m + 1)).sum()
print(json.dumps(np.minimum(np.minimum.accumulate(ranked[::-1])[::-1], 1).tolist()))`,
    published,
  );
  const found = adjustFalseDiscovery(Float64Array.from(published), harmonic(15));
  found.forEach((p, i) => expect(p).toBeCloseTo(expected[i], 12));
  expect(found.filter((p) => p <= 0.05).length).toBe(3);
});
