import type { Axes, CorrectionOutcome } from '../types';
import { clopperPearson } from './clopper-pearson';
import type { Correction, Evidence } from './correction';
import { ascending, countAtLeast, criticalOf } from './distribution';
import { regionEdges } from './edges';
import { mostExceedances, permutationP } from './p-value';
import { faultOfMaxima, featuresOf, type NullPart } from './part';
import { tailSigns } from './tail';

/**
 * Edges (pairs of sites) beyond the threshold at one frequency and time, joined where they share a
 * site. Returns for each pair of `pairs` (indices into the plan's) the edges of its component.
 * Source: Zalesky et al. 2010. Cost: near enough a constant an edge.
 */
export function componentSizes(axes: Axes, pairs: ArrayLike<number>): Uint32Array {
  const parent = Int32Array.from(axes.sites, (_, i) => i);
  const top = (site: number) => {
    let at = site;
    while (parent[at] !== at) {
      parent[at] = parent[parent[at]];
      at = parent[at];
    }
    return at;
  };
  for (let i = 0; i < pairs.length; i++) {
    const [j, k] = axes.pairs[pairs[i]];
    parent[top(j)] = top(k);
  }
  const edges = new Uint32Array(axes.sites.length);
  for (let i = 0; i < pairs.length; i++) edges[top(axes.pairs[pairs[i]][0])]++;
  return Uint32Array.from(pairs, (pair) => edges[top(axes.pairs[pair][0])]);
}

/**
 * A component needs all pairs of a permutation, a block has some: a share lists, for each
 * permutation in turn, how many of the block's features lie beyond the threshold, then each as
 * sign * (1 + pair * featureCount + feature), exact in f32 below 2^24 (the plan's limit is 6
 * million). Memory: 4 bytes for each, features x permutations x share beyond the threshold in all
 * (at |z| > 2.5 about 1.2 %), until they are merged into one maximum a permutation.
 */
const largestComponent: NullPart = {
  isMaxima: true,
  gatherer(context) {
    const { tail, clusterFormingZ, permutations } = context.test;
    const size = featuresOf(context);
    const signs = tailSigns(tail);
    const lists = Array.from({ length: permutations }, (): number[] => []);
    let first = 1;
    return {
      begin(pair) {
        first = 1 + pair * size;
      },
      add(permutation, z) {
        for (const sign of signs) {
          for (let x = 0; x < size; x++) {
            if (z[x] * sign > clusterFormingZ) lists[permutation].push(sign * (first + x));
          }
        }
      },
      finish() {
        const total = lists.reduce((sum, list) => sum + 1 + list.length, 0);
        const share = new Float32Array(total);
        let at = 0;
        for (const list of lists) {
          share[at] = list.length;
          share.set(list, at + 1);
          at += 1 + list.length;
        }
        return share;
      },
    };
  },
  merge(shares, context) {
    const { permutations } = context.test;
    const maxima = new Float32Array(permutations);
    const at = shares.map(() => 0);
    for (let p = 0; p < permutations; p++) {
      const beyond = shares.flatMap((share, i) => {
        const from = at[i] + 1;
        at[i] = from + share[at[i]];
        return Array.from(share.subarray(from, at[i]));
      });
      maxima[p] = largestOf(beyond, context.axes, featuresOf(context));
    }
    return maxima;
  },
  fault: faultOfMaxima,
};

/** Most edges of a component, over frequencies, times and signs. */
function largestOf(beyond: number[], axes: Axes, featureCount: number): number {
  const groups = new Map<number, number[]>();
  for (const code of beyond) {
    const feature = (Math.abs(code) - 1) % featureCount;
    const key = code < 0 ? -1 - feature : feature;
    const pair = (Math.abs(code) - 1 - feature) / featureCount;
    const group = groups.get(key);
    if (group) group.push(pair);
    else groups.set(key, [pair]);
  }
  let largest = 0;
  for (const pairs of groups.values()) {
    if (pairs.length <= largest) continue;
    for (const size of componentSizes(axes, pairs)) if (size > largest) largest = size;
  }
  return largest;
}

/** Edges of the observed component that each feature belongs to; 0 below the threshold. */
function observedSizes({ axes, maps, tail, clusterFormingZ }: Evidence): Uint32Array {
  const featureCount = axes.frequenciesHz.length * axes.timesS.length;
  const sizes = new Uint32Array(maps.z.length);
  for (let x = 0; x < featureCount; x++) {
    for (const sign of tailSigns(tail)) {
      const pairs = axes.pairs.flatMap((_, pair) =>
        maps.z[pair * featureCount + x] * sign > clusterFormingZ ? [pair] : [],
      );
      componentSizes(axes, pairs).forEach((size, i) => (sizes[pairs[i] * featureCount + x] = size));
    }
  }
  return sizes;
}

function judge(evidence: Evidence): CorrectionOutcome {
  const { maps, alpha, permutations } = evidence;
  const sorted = ascending(maps.parts[networkComponents.id]);
  const most = mostExceedances(alpha, permutations);
  const sizes = observedSizes(evidence);
  const adjustedP = new Float32Array(sizes.length).fill(1);
  const claimed = new Uint8Array(sizes.length);
  for (let x = 0; x < sizes.length; x++) {
    if (sizes[x] === 0) continue;
    const count = countAtLeast(sorted, sizes[x]);
    adjustedP[x] = permutationP(count, permutations);
    if (count <= most) claimed[x] = 1;
  }
  const critical = criticalOf(sorted, most);
  return {
    id: networkComponents.id,
    adjustedP,
    edges: regionEdges(evidence, networkComponents.id, claimed, (peak) => {
      const count = countAtLeast(sorted, sizes[peak]);
      return {
        adjustedP: permutationP(count, permutations),
        adjustedPInterval: clopperPearson(count, permutations),
      };
    }),
    criticalValue: critical === null ? null : critical + 1,
    // Many small differences make a component as few large ones do: no single one stands for it.
    smallestDifference: null,
  };
}

export const networkComponents: Correction<'network-components'> = {
  id: 'network-components',
  name: 'Network components (edges)',
  family: 'family-wise',
  statistic: 'edges of a component',
  sentence:
    'At each frequency and time, pairs beyond the forming threshold that share a site are joined, and the number of pairs in such a component is held against the largest anywhere in each permutation.',
  caution:
    'The claim is about the component as a whole, not about any one of its pairs. A reference or a source shared by many sites makes large components by itself.',
  source: 'Zalesky et al. 2010',
  part: largestComponent,
  judge,
};
