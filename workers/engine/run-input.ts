import { measureOf } from './measure/registry';
import { drawShape } from './null/draws';
import type { RunInput } from './null/model';
import { nullModelOf } from './null/registry';
import type { DrawData, PhaseData } from './pairs';
import { phaseLayout } from './phase/layout';
import type { Plan } from './plan';
import { windowSamples } from './prepare/grid';
import type { Axes } from './types';

/** A condition of one epoch has R = 1 whatever its phase: nothing can be said of it. */
const fewestEpochs = 2;

/**
 * Checks a run's buffers against its plan and says where everything lies.
 * @throws RangeError naming what does not fit
 */
export function runInput(plan: Plan, axes: Axes, phases: PhaseData, draws: DrawData): RunInput {
  const { epochsA, epochsB } = phases;
  for (const [name, count] of [
    ['A', epochsA],
    ['B', epochsB],
  ] as const) {
    if (!(count >= fewestEpochs)) {
      throw new RangeError(
        `condition ${name} has ${count} epochs, at least ${fewestEpochs} are needed: widen its rules`,
      );
    }
  }
  const model = nullModelOf(plan.null);
  const shape = drawShape(plan, axes, phases);
  const window = windowSamples(plan, axes.samplingRateHz);
  const layout = phaseLayout(axes, epochsA + epochsB, window, model.needsWholeWindow);
  fits('phases', phases.buffer.byteLength, layout.byteLength);
  fits('draws', draws.buffer.byteLength, model.drawsByteLength(shape));
  return {
    measure: measureOf(plan.measure),
    phasors: new Float32Array(phases.buffer),
    layout,
    shape,
    draws: draws.buffer,
    featureCount: axes.frequenciesHz.length * axes.timesS.length,
  };
}

function fits(name: string, bytes: number, needed: number): void {
  if (bytes !== needed) {
    throw new RangeError(`${name}: a buffer of ${bytes} bytes where the plan needs ${needed}`);
  }
}
