import { windowSamples } from '../prepare/grid';
import type { Plan } from '../plan';
import type { Axes } from '../types';
import type { RunCounts } from '../digest';
import type { DrawShape, PermutationRange } from './model';
import { nullModelOf } from './registry';

/** The sizes that a plan's draws depend on. */
export function drawShape(plan: Plan, axes: Axes, counts: RunCounts): DrawShape {
  return {
    permutations: plan.test.permutations,
    siteCount: axes.sites.length,
    epochsA: counts.epochsA,
    epochsB: counts.epochsB,
    blocks: counts.blocks,
    windowSamples: windowSamples(plan, axes.samplingRateHz).count,
  };
}

/** Bytes that the draws of all permutations take. */
export function drawsByteLength(plan: Plan, axes: Axes, counts: RunCounts): number {
  return nullModelOf(plan.null).drawsByteLength(drawShape(plan, axes, counts));
}

/**
 * Draws permutations `from .. to - 1` of a plan into the shared buffer, and touches nothing else
 * of it: any worker may draw any range.
 * @throws RangeError when the range or the buffer does not fit the plan
 */
export function drawPermutations(
  plan: Plan,
  axes: Axes,
  counts: RunCounts,
  range: PermutationRange,
  draws: ArrayBufferLike,
): void {
  const shape = drawShape(plan, axes, counts);
  const { from, to } = range;
  if (!(from >= 0 && from <= to && to <= shape.permutations)) {
    throw new RangeError(
      `drawPermutations: range ${from} to ${to} leaves the plan's ${shape.permutations} permutations`,
    );
  }
  const model = nullModelOf(plan.null);
  const bytes = model.drawsByteLength(shape);
  if (draws.byteLength !== bytes) {
    throw new RangeError(
      `drawPermutations: a buffer of ${draws.byteLength} bytes where the plan needs ${bytes}`,
    );
  }
  model.draw(plan.test.seed, range, draws, shape);
}
