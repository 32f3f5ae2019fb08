import type { Plan } from '../plan';
import type { Epoch, LostEpoch, RecordingFacts } from '../types';
import { measureOf, type MeasureId } from '../measure/registry';
import type { ChanceLevels } from '../numbers/chance';
import { drawShape } from '../null/draws';
import { epochBlocks } from '../null/epoch-blocks';
import { nullModelOf } from '../null/registry';
import { phaseLayout } from '../phase/layout';
import type { KernelWidth } from '../phase/method';
import { phaseMethod } from '../phase/registry';
import { keepsWholeWindow } from '../phase/window';
import { axesOf } from '../prepare/axes';
import { windowSamples } from '../prepare/grid';
import { planEpochs } from '../prepare/plan-epochs';
import { cautionsOf, type Caution } from './cautions';
import { smallestAdjustedP, smallestP, type EpochCounts } from './reach';

export type { Caution, CautionCode } from './cautions';
export type { EpochCounts } from './reach';
export type { KernelWidth } from '../phase/method';

/** The z at which the smallest difference is stated: about what a map of many tests asks for. */
export const statedZ = 3.5;

/** What a plan can show and what speaks against it, before any statistic is computed. */
export interface Consequences {
  /** Whose chance levels and differences these are. */
  measure: MeasureId;
  pairs: number;
  frequencies: number;
  times: number;
  /** Tests in all: pairs x frequencies x times. */
  tests: number;
  /** Epochs that go into the test: as screened, or as the metadata allow. */
  epochs: EpochCounts;
  lost: LostEpoch[];
  /** Smallest p under the correction that carries the claim. */
  smallestP: number;
  /** Smallest p of a single test, uncorrected. */
  smallestUncorrectedP: number;
  /** Different arrangements the null can draw; null when beyond counting (above 10^15). */
  arrangements: number | null;
  /** The measure expected by chance alone at these counts; null without epochs or a formula. */
  chance: { a: number | null; b: number | null };
  /** Value of the measure that chance passes at alpha in one test. */
  critical: { a: number | null; b: number | null };
  /** Difference of the measure that stands at z = `statedZ` where there is no synchrony in either. */
  smallestDifference: { z: number; difference: number | null };
  /** The settings that the kernels are of, to draw them. */
  phase: Plan['phase'];
  kernels: KernelWidth[];
  guardS: number;
  /** Memory for the phases of all epochs, shared by the workers, bytes. */
  phaseBytes: number;
  /** Memory for the draws of all permutations, shared likewise, bytes. */
  drawBytes: number;
  cautions: Caution[];
}

/**
 * The consequences of a plan. Pure, reads no samples, fast enough to run at each keystroke.
 * `screened` are the epochs left after limits in uV, when they are known.
 * @throws PlanError when the plan does not fit the recordings.
 */
export function consequencesOf(
  plan: Plan,
  recordings: RecordingFacts[],
  screened?: { epochs: Epoch[]; lost: LostEpoch[] },
): Consequences {
  const axes = axesOf(plan, recordings);
  const window = windowSamples(plan, axes.samplingRateHz);
  const { epochs, lost } = screened ?? planEpochs(plan, recordings);
  const counts = countsOf(epochs);
  const kernels = phaseMethod(plan.phase.method).widths(
    plan.phase,
    axes.frequenciesHz,
    axes.samplingRateHz,
  );
  const model = nullModelOf(plan.null);
  const shape = drawShape(plan, axes, {
    epochsA: counts.a,
    epochsB: counts.b,
    blocks: epochBlocks(plan, epochs),
  });
  const arrangements = model.logArrangements(shape);
  const tests = axes.pairs.length * axes.frequenciesHz.length * axes.timesS.length;
  const facts = {
    measure: plan.measure,
    pairs: axes.pairs.length,
    frequencies: axes.frequenciesHz.length,
    times: axes.timesS.length,
    tests,
    epochs: counts,
    lost,
    smallestP: smallestAdjustedP(
      plan.test,
      plan.test.corrections[0],
      arrangements,
      model.hasTwins(shape),
    ),
    smallestUncorrectedP: smallestP(plan.test, arrangements),
    arrangements: arrangements > Math.log(1e15) ? null : Math.round(Math.exp(arrangements)),
    ...chanceFacts(plan, counts),
    phase: plan.phase,
    kernels,
    guardS: Math.max(...kernels.map((kernel) => kernel.halfLength)) / axes.samplingRateHz,
    phaseBytes: phaseLayout(axes, epochs.length, window, keepsWholeWindow(plan)).byteLength,
    drawBytes: model.drawsByteLength(shape),
  };
  return { ...facts, cautions: cautionsOf({ plan, recordings, axes, epochs, window, facts }) };
}

function countsOf(epochs: Epoch[]): EpochCounts {
  const a = epochs.filter((epoch) => epoch.condition === 'a').length;
  return { a, b: epochs.length - a };
}

function chanceFacts(
  plan: Plan,
  { a, b }: EpochCounts,
): Pick<Consequences, 'chance' | 'critical' | 'smallestDifference'> {
  const { chance } = measureOf(plan.measure);
  const of = (value: (levels: ChanceLevels, epochs: number) => number) => ({
    a: chance && a > 0 ? value(chance, a) : null,
    b: chance && b > 0 ? value(chance, b) : null,
  });
  return {
    chance: of((levels, epochs) => levels.level(epochs)),
    critical: of((levels, epochs) => levels.critical(epochs, plan.test.alpha)),
    smallestDifference: {
      z: statedZ,
      difference:
        chance && a > 0 && b > 0 ? Math.min(1, statedZ * chance.differenceSd(a, b)) : null,
    },
  };
}
