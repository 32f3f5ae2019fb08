import { measureOf, type Consequences, type LossReason, type LostEpoch, type Plan } from '$engine';
import { formatBytes, formatCount, formatNumber, formatP, formatSeconds } from '$lib/model/format';

export interface Fact {
  name: string;
  value: string;
  hint?: string | undefined;
}

const span = (low: number, high: number, digits: number) =>
  low.toFixed(digits) === high.toFixed(digits)
    ? formatNumber(low, digits)
    : `${formatNumber(low, digits)} to ${formatNumber(high, digits)}`;

function chanceFacts({ epochs, chance }: Consequences, measure: string): Fact[] {
  if (chance.a === null && chance.b === null) return [];
  const hint = `With no synchrony at all, ${measure} is near this. It cannot be read as synchrony below that.`;
  const of = (condition: 'a' | 'b') => ({
    name: `${measure} by chance, ${condition.toUpperCase()} at ${formatCount(epochs[condition], 'epoch')}`,
    value: formatNumber(chance[condition], 3),
    hint,
  });
  return [of('a'), of('b')];
}

/** Expected time of a run on this machine; nothing while it is not measured. */
export function timeFacts(seconds: number | null, workers: number): Fact[] {
  if (seconds === null) return [];
  const time = seconds < 1 ? 'under 1 s' : formatSeconds(Math.round(seconds));
  return [
    {
      name: 'time on this machine',
      value: `${time}, ${formatCount(workers, 'worker')}`,
      hint: 'Measured here on a small sample of this plan; reading the recordings comes on top.',
    },
  ];
}

/** What a plan can show, in the order of the panel. */
export function testFacts(facts: Consequences): Fact[] {
  const measure = measureOf(facts.measure).shortName;
  const widths = facts.kernels.map((kernel) => kernel.timeFwhmS);
  const bands = facts.kernels.map((kernel) => kernel.frequencyFwhmHz);
  const { z, difference } = facts.smallestDifference;
  return [
    {
      name: 'tests',
      value: formatCount(facts.tests),
      hint: `${formatCount(facts.pairs, 'pair')} × ${formatCount(facts.frequencies, 'frequency', 'frequencies')} × ${formatCount(facts.times, 'time')}.`,
    },
    {
      name: 'smallest p it can give',
      value: formatP(facts.smallestP),
      hint: 'Under the correction that carries the claim: one in the permutations plus one, and no less than one in the different ways of shuffling.',
    },
    ...chanceFacts(facts, measure),
    {
      name: `smallest difference at z = ${formatNumber(z, 1)}`,
      value: difference === null ? '–' : `about ${formatNumber(difference, 2)}`,
      hint: `The difference A − B of ${measure} that stands this far out of the null where neither condition synchronises.`,
    },
    {
      name: 'kernel width in time',
      value: `${span(Math.min(...widths), Math.max(...widths), 2)} s`,
      hint: 'Full width at half maximum of the kernel: moments closer than this are not separate.',
    },
    {
      name: 'kernel width in frequency',
      value: `${span(Math.min(...bands), Math.max(...bands), 1)} Hz`,
      hint: 'Full width at half maximum of its spectrum: frequencies closer than this are not separate.',
    },
    {
      name: 'guard on each side',
      value: `${formatNumber(facts.guardS, 2)} s`,
      hint: 'Samples beyond the window that protect its edges from the longest kernel.',
    },
    {
      name: 'shared memory',
      value: formatBytes(facts.phaseBytes),
      hint: 'The phases of all epochs, held once for all workers. It does not grow with the permutations.',
    },
  ];
}

const reasonNames: Record<LossReason, string> = {
  'guard-leaves-recording': 'guard leaves the recording',
  'crosses-gap': 'crosses a gap',
  'above-limit': 'above the limit',
  flat: 'flat',
  'by-hand': 'marked by hand',
};

/** "above 150 µV": a reason with the limit that it is about. */
export function reasonName(
  reason: LossReason,
  { aboveUv, flatBelowUv }: Plan['epoch']['reject'],
): string {
  if (reason === 'above-limit') return `above ${aboveUv} µV`;
  if (reason === 'flat') return `flat, below ${flatBelowUv} µV`;
  return reasonNames[reason];
}

export interface LossRow {
  name: string;
  /** Null while the samples have not been looked at. */
  a: number | null;
  b: number | null;
}

/** Epochs left out by reason and condition; amplitudes are known only after they were counted. */
export function lossRows(plan: Plan, lost: readonly LostEpoch[], screened: boolean): LossRow[] {
  const { reject } = plan.epoch;
  const reasons: LossReason[] = ['guard-leaves-recording', 'crosses-gap'];
  if (reject.aboveUv !== null) reasons.push('above-limit');
  if (reject.flatBelowUv !== null) reasons.push('flat');
  reasons.push('by-hand');
  return reasons.map((reason) => {
    const needsSamples = reason === 'above-limit' || reason === 'flat';
    const count = (condition: 'a' | 'b') =>
      needsSamples && !screened
        ? null
        : lost.filter((each) => each.reason === reason && each.condition === condition).length;
    return { name: reasonName(reason, reject), a: count('a'), b: count('b') };
  });
}
