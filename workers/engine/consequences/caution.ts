import type { Plan } from '../plan';
import type { KernelWidth } from '../phase/method';
import type { WindowSamples } from '../phase/layout';
import type { Axes, Epoch, LostEpoch, RecordingFacts } from '../types';
import type { EpochCounts } from './reach';

export type CautionCode =
  | 'too-few-epochs'
  | 'too-much-memory'
  | 'window-too-long'
  | 'few-permutations'
  | 'few-arrangements'
  | 'coarse-p'
  | 'few-for-maxima'
  | 'few-epochs'
  | 'epochs-lost'
  | 'unequal-epochs'
  | 'different-recordings'
  | 'conditions-in-blocks'
  | 'blocks-of-one-label'
  | 'epochs-overlap'
  | 'wide-kernels'
  | 'phase-method'
  | 'short-window-for-shifts'
  | 'shared-sources'
  | 'reference-of-few'
  | 'laplacian-of-few'
  | 'reference-analysed'
  | 'bad-site'
  | 'line-frequency'
  | 'synchrony-in-both'
  | 'measure'
  | 'claim-of-neighbours'
  | 'components-of-few-pairs'
  | 'components-memory'
  | 'cluster-claim'
  | 'false-discovery-dependence';

/**
 * What to think about before locking. `stop`: the plan cannot be run; `attention`: it can mislead;
 * `note`: how to read what it will say.
 */
export interface Caution {
  code: CautionCode;
  severity: 'stop' | 'attention' | 'note';
  message: string;
}

/** What cautions are drawn from. */
export interface CautionInput {
  plan: Plan;
  recordings: RecordingFacts[];
  axes: Axes;
  epochs: Epoch[];
  window: WindowSamples;
  facts: {
    tests: number;
    epochs: EpochCounts;
    lost: LostEpoch[];
    smallestP: number;
    smallestUncorrectedP: number;
    arrangements: number | null;
    chance: { a: number | null; b: number | null };
    kernels: KernelWidth[];
    phaseBytes: number;
    drawBytes: number;
  };
}

export type CautionRule = (input: CautionInput) => Caution | null;

/** "12,345"; up to `digits` significant digits otherwise. */
export function said(value: number, digits = 2): string {
  if (Number.isInteger(value)) return value.toLocaleString('en');
  return Number(value.toPrecision(digits)).toLocaleString('en', { maximumFractionDigits: 8 });
}

/** The kernel that is widest in time. */
export function widestKernel(kernels: KernelWidth[]): KernelWidth {
  return kernels.reduce((best, kernel) => (kernel.timeFwhmS > best.timeFwhmS ? kernel : best));
}
