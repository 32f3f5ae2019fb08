import type { Epoch } from '../types';
import { measureOf } from '../measure/registry';
import { epochBlocks } from '../null/epoch-blocks';
import { nullModelOf } from '../null/registry';
import { runsTest } from '../numbers/runs-test';
import { said, widestKernel, type CautionInput, type CautionRule } from './caution';

/** Below this the chance level is high and the Rayleigh approximation poor. Common practice, no source. */
const wantedEpochs = 20;
/** Share of a condition's epochs whose loss is worth a word. Common practice, no source. */
const lostShare = 0.25;
/** Ratio of epoch counts from which chance levels differ visibly. Common practice, no source. */
const unequalRatio = 1.2;

export const tooFewEpochs: CautionRule = ({ plan, facts }) => {
  const few = (['a', 'b'] as const).filter((condition) => facts.epochs[condition] < 2);
  if (few.length === 0) return null;
  const which = few
    .map((c) => `${c.toUpperCase()}, ${plan[c].name}, has ${said(facts.epochs[c])}`)
    .join(' and ');
  return {
    code: 'too-few-epochs',
    severity: 'stop',
    message: `Each condition needs at least 2 epochs, but ${which}. Change its events, the window or the limits.`,
  };
};

export const fewEpochs: CautionRule = ({ plan, facts: { epochs, chance } }) => {
  const condition = epochs.a <= epochs.b ? 'a' : 'b';
  const count = epochs[condition];
  const level = chance[condition];
  if (count < 2 || count >= wantedEpochs) return null;
  return {
    code: 'few-epochs',
    severity: 'attention',
    message: `${condition.toUpperCase()} has ${said(count)} epochs only: ${level === null || level === 0 ? 'chance alone moves the measure far' : `chance alone makes ${measureOf(plan.measure).shortName} near ${level.toFixed(2)}`}, so only large differences can be seen.`,
  };
};

export const epochsLost: CautionRule = ({ plan, facts }) => {
  const parts = (['a', 'b'] as const).flatMap((condition) => {
    const lost = facts.lost.filter((epoch) => epoch.condition === condition).length;
    const all = lost + facts.epochs[condition];
    return all > 0 && lost / all > lostShare
      ? [`${said(lost)} of ${said(all)} in ${condition.toUpperCase()}, ${plan[condition].name}`]
      : [];
  });
  if (parts.length === 0) return null;
  return {
    code: 'epochs-lost',
    severity: 'attention',
    message: `Many epochs are left out: ${parts.join('; ')}. Those that stay may not stand for the rest.`,
  };
};

export const unequalEpochs: CautionRule = ({ plan, facts: { epochs, chance } }) => {
  const { a, b } = epochs;
  if (a < 2 || b < 2 || Math.max(a, b) / Math.min(a, b) < unequalRatio) return null;
  if (chance.a === null || chance.b === null || chance.a === chance.b) return null;
  return {
    code: 'unequal-epochs',
    severity: 'attention',
    message: `A has ${said(a)} epochs and B ${said(b)}: chance alone makes ${measureOf(plan.measure).shortName} near ${chance.a.toFixed(3)} in A and ${chance.b.toFixed(3)} in B. The null keeps the counts, so p holds; the raw difference leans to the smaller condition.`,
  };
};

export const differentRecordings: CautionRule = ({ epochs }) => {
  const inA = recordingsOf(epochs, 'a');
  const inB = recordingsOf(epochs, 'b');
  if (inA.size === 0 || inB.size === 0) return null;
  if ([...inA].some((recording) => inB.has(recording))) return null;
  return {
    code: 'different-recordings',
    severity: 'attention',
    message:
      'A and B come from different recordings: whatever else changed between them, such as the cap, drowsiness or the hour, is part of the difference.',
  };
};

export const conditionsInBlocks: CautionRule = (input) => {
  if (!nullModelOf(input.plan.null).exchangesLabels) return null;
  const sequences = sequencesByTime(input);
  const { runs, p } = runsTest(sequences);
  if (runs === 0 || p >= 0.05) return null;
  const advice =
    'Labels are exchangeable only if nothing else drifts; interleave the conditions where you can.';
  return {
    code: 'conditions-in-blocks',
    severity: 'attention',
    message: `${orderInWords(sequences)} (runs test, p ${p < 0.001 ? '< 0.001' : `= ${p.toFixed(3)}`}). ${advice}`,
  };
};

/** Labels in time order within each recording, or block of the null: true for A. */
function sequencesByTime({ plan, epochs }: CautionInput): boolean[][] {
  const blocks = epochBlocks(plan, epochs);
  const byRecording = new Map<string, Epoch[]>();
  for (const [n, epoch] of epochs.entries()) {
    const key = blocks ? String(blocks[n]) : epoch.recording;
    byRecording.set(key, [...(byRecording.get(key) ?? []), epoch]);
  }
  return [...byRecording.values()].map((list) =>
    list.sort((x, y) => x.onsetS - y.onsetS).map((epoch) => epoch.condition === 'a'),
  );
}

/** Chance that an epoch of A comes before one of B of the same recording, in words. */
function orderInWords(sequences: boolean[][]): string {
  let before = 0;
  let pairs = 0;
  for (const sequence of sequences) {
    let seenA = 0;
    for (const isA of sequence) {
      if (isA) seenA++;
      else before += seenA;
    }
    pairs += seenA * (sequence.length - seenA);
  }
  const share = before / pairs;
  if (share >= 0.75) return 'A comes mostly before B';
  if (share <= 0.25) return 'B comes mostly before A';
  return 'A and B come in blocks';
}

export const blocksOfOneLabel: CautionRule = ({ plan, epochs }) => {
  const blocks = epochBlocks(plan, epochs);
  if (!blocks || epochs.length === 0) return null;
  const labels = new Map<number, Set<string>>();
  for (const [n, { condition }] of epochs.entries()) {
    labels.set(blocks[n], (labels.get(blocks[n]) ?? new Set()).add(condition));
  }
  const single = [...labels.values()].filter((found) => found.size === 1).length;
  if (single === 0) return null;
  const none = single === labels.size;
  return {
    code: 'blocks-of-one-label',
    severity: none ? 'stop' : 'attention',
    message: none
      ? `No block holds epochs of both A and B, so no label can change its place: take larger blocks, or free labels.`
      : `${said(single)} of ${said(labels.size)} blocks hold epochs of one condition only: their labels cannot change places, and they say nothing.`,
  };
};

export const epochsOverlap: CautionRule = ({ epochs, window, axes, facts, plan }) => {
  const byTime = [...epochs].sort(
    (x, y) =>
      (x.recording < y.recording ? -1 : x.recording > y.recording ? 1 : 0) ||
      x.segment - y.segment ||
      x.sample - y.sample,
  );
  const distances = byTime
    .slice(1)
    .map((next, i) =>
      next.recording === byTime[i].recording && next.segment === byTime[i].segment
        ? next.sample - byTime[i].sample
        : Infinity,
    );
  // One shared sample is only the common border of windows that follow each other.
  const sharing = distances.filter((distance) => distance < window.count - 1).length;
  if (sharing > 0) {
    return {
      code: 'epochs-overlap',
      severity: 'attention',
      message: `${said(sharing)} of ${said(epochs.length)} epochs share samples with the next one: they count as separate, but are not independent. Shorten the window or space the epochs wider.`,
    };
  }
  const widest = widestKernel(facts.kernels);
  const span = plan.times.toS - plan.times.fromS;
  const near = distances.filter(
    (distance) => distance / axes.samplingRateHz - span < widest.timeFwhmS,
  ).length;
  if (near === 0) return null;
  return {
    code: 'epochs-overlap',
    severity: 'attention',
    message: `At ${said(widest.frequencyHz, 3)} Hz the kernel is ${said(widest.timeFwhmS)} s wide at half height, and ${said(near)} of ${said(epochs.length)} epochs are closer to the next one: their phases share data.`,
  };
};

function recordingsOf(epochs: Epoch[], condition: Epoch['condition']): Set<string> {
  return new Set(
    epochs.filter((epoch) => epoch.condition === condition).map((epoch) => epoch.recording),
  );
}
