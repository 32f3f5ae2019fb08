import { groupFeatures } from '../kernels/group';
import { planParts } from './correct/plan-parts';
import type { NullSettings, PairNull } from './null/pair-null';
import type { Plan } from './plan';
import type { Axes, PairBlock } from './types';

/** Gathers over a block what the plan's corrections need beyond the maxima of every run. */
export interface PartsWork {
  /** What the null is made with so that its maps are seen; nothing where no correction asks. */
  visitor: Pick<NullSettings, 'onMaps'>;
  /** To be called before a pair is worked out. */
  begin(pair: number, nulls: PairNull): void;
  finish(): PairBlock['parts'];
}

export function partsWork(plan: Plan, axes: Axes, featureCount: number): PartsWork {
  const context = { axes, test: plan.test };
  const parts = planParts(plan.test).map(([id, part]) => [id, part.gatherer(context)] as const);
  const finish = () => Object.fromEntries(parts.map(([id, each]) => [id, each.finish()]));
  if (parts.length === 0) return { visitor: {}, begin: () => undefined, finish };
  const map = new Float32Array(featureCount);
  let current: { pair: number; nulls: PairNull } | null = null;
  return {
    visitor: {
      onMaps({ from, to }, z) {
        if (!current) return;
        const { pair, nulls } = current;
        if (from === 0) {
          const observed = Float32Array.from(map, (_, x) => nulls.observedZ(x));
          for (const [, each] of parts) each.begin(pair, observed);
        }
        for (let row = 0; row < to - from; row++) {
          copyRow(z, row, to - from, map);
          for (const [, each] of parts) each.add(from + row, map);
        }
      },
    },
    begin(pair, nulls) {
      current = { pair, nulls };
    },
    finish,
  };
}

/** One permutation's map out of `z[(group * rows + row) * 8 + feature of the group]`. */
function copyRow(z: Float32Array, row: number, rows: number, map: Float32Array): void {
  for (let x = 0; x < map.length; x++) {
    const group = Math.floor(x / groupFeatures);
    map[x] = z[(group * rows + row) * groupFeatures + (x % groupFeatures)];
  }
}
