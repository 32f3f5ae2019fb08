import { enhance, enhanceScratch, type EnhanceSettings } from '../../kernels/enhance';
import type { CorrectionOutcome } from '../types';
import { ties } from '../ties';
import { clopperPearson } from './clopper-pearson';
import type { Correction, Evidence } from './correction';
import { ascending, countAtLeast, criticalOf } from './distribution';
import { regionEdges } from './edges';
import { mostExceedances, permutationP } from './p-value';
import { featuresOf, maximaPart } from './part';
import { tailSigns } from './tail';

/** Exponents of Smith and Nichols 2009 for maps of two dimensions; heights a tenth of z apart. */
export const enhancement = { extent: 0.5, height: 2, step: 0.1 } as const;

const largestEnhanced = maximaPart((context) => {
  const { axes, test } = context;
  const settings: EnhanceSettings = { ...enhancement, timeCount: axes.timesS.length };
  const scratch = enhanceScratch(featuresOf(context));
  const values = new Float64Array(featuresOf(context));
  return (z) =>
    tailSigns(test.tail).reduce(
      (largest, sign) => Math.max(largest, enhance(z, 0, sign, values, settings, scratch)),
      0,
    );
});

/** Enhanced values of the observed map, [pair][frequency][time]. */
export function enhancedMap({ axes, maps, tail }: Pick<Evidence, 'axes' | 'maps' | 'tail'>) {
  const timeCount = axes.timesS.length;
  const featureCount = axes.frequenciesHz.length * timeCount;
  const settings = { ...enhancement, timeCount };
  const scratch = enhanceScratch(featureCount);
  const values = new Float64Array(featureCount);
  const map = new Float64Array(maps.z.length);
  for (let start = 0; start < map.length; start += featureCount) {
    for (const sign of tailSigns(tail)) {
      enhance(maps.z, start, sign, values, settings, scratch);
      values.forEach((value, x) => (map[start + x] += value));
    }
  }
  return map;
}

function judge(evidence: Evidence): CorrectionOutcome {
  const { maps, alpha, permutations } = evidence;
  const sorted = ascending(maps.parts[thresholdFreeEnhancement.id]);
  const most = mostExceedances(alpha, permutations);
  const enhanced = enhancedMap(evidence);
  const exceedances = (x: number) => countAtLeast(sorted, enhanced[x] * (1 - ties.mass));
  const adjustedP = new Float32Array(enhanced.length);
  const claimed = new Uint8Array(enhanced.length);
  for (let x = 0; x < enhanced.length; x++) {
    const count = exceedances(x);
    adjustedP[x] = permutationP(count, permutations);
    if (count <= most && enhanced[x] > 0) claimed[x] = 1;
  }
  const critical = criticalOf(sorted, most);
  return {
    id: thresholdFreeEnhancement.id,
    adjustedP,
    edges: regionEdges(evidence, thresholdFreeEnhancement.id, claimed, (peak) => {
      const count = exceedances(peak);
      return {
        adjustedP: permutationP(count, permutations),
        adjustedPInterval: clopperPearson(count, permutations),
      };
    }),
    criticalValue: critical === null ? null : critical * (1 + ties.mass),
    // Height and extent make up for each other: no single difference stands for a value.
    smallestDifference: null,
  };
}

export const thresholdFreeEnhancement: Correction<'threshold-free-enhancement'> = {
  id: 'threshold-free-enhancement',
  name: 'Threshold-free enhancement',
  family: 'family-wise',
  statistic: 'enhanced value',
  sentence:
    'Each point is raised by its neighbours, √extent · z² summed over all heights in steps of 0.1, and held against the largest such value anywhere in each permutation: no forming threshold is chosen.',
  caution:
    'A point is claimed with the help of its neighbours within the pair: its own strength alone may not suffice, and edges of a claimed region are soft.',
  source: 'Smith and Nichols 2009 (E = 0.5, H = 2)',
  part: largestEnhanced,
  judge,
};
