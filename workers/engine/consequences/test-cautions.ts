import type { Correction } from '../correct/correction';
import { correctionOf } from '../correct/registry';
import { nullCaution } from '../null/caution';
import { measureOf } from '../measure/registry';
import { nullModelOf } from '../null/registry';
import { said, widestKernel, type CautionRule } from './caution';
import { togetherForFalseDiscovery } from './reach';

/** Half-width of a p's 95 % interval at alpha, over alpha, that is worth a word. Common practice, no source. */
const coarseShare = 0.3;
/** Windows shorter than this many kernel widths hold few different shifts. Common practice, no source. */
const widthsForShifts = 10;

export const fewPermutations: CautionRule = ({ plan, facts }) => {
  const { alpha, permutations, corrections } = plan.test;
  if (facts.smallestP > alpha) {
    return {
      code: 'few-permutations',
      severity: 'attention',
      message: `The smallest p this test can give is ${said(facts.smallestP)}, above alpha ${said(alpha)}: nothing can be claimed. Ask for more permutations${facts.arrangements !== null && facts.arrangements < permutations ? ' and more epochs' : ''}.`,
    };
  }
  const rate = corrections.map(correctionOf).find((each: Correction) => each.inflation);
  if (!rate) return null;
  const inflation = (rate as Correction).inflation?.(facts.tests);
  const together = togetherForFalseDiscovery(
    plan.test,
    facts.tests,
    facts.smallestUncorrectedP,
    inflation,
  );
  if (together === 1) return null;
  if (together > facts.tests) {
    return {
      code: 'few-permutations',
      severity: 'attention',
      message: `With ${said(permutations)} permutations, ${rate.name} cannot claim any of the ${said(facts.tests)} tests, even if all reach the smallest p: ask for more permutations.`,
    };
  }
  return {
    code: 'few-permutations',
    severity: 'attention',
    message: `With ${said(permutations)} permutations, ${rate.name} can claim something only when ${said(together)} of the ${said(facts.tests)} tests reach the smallest p, ${said(facts.smallestUncorrectedP)}, together.`,
  };
};

export const fewArrangements: CautionRule = ({ plan, facts }) => {
  const { arrangements, epochs } = facts;
  if (epochs.a < 2 || epochs.b < 2) return null;
  if (arrangements === null || arrangements >= plan.test.permutations) return null;
  return {
    code: 'few-arrangements',
    severity: 'attention',
    message: `These epochs can be shuffled in ${said(arrangements)} different ways only: ${said(plan.test.permutations)} permutations repeat them, and p cannot fall below one in ${said(arrangements)}.`,
  };
};

export const shortWindowForShifts: CautionRule = ({ plan, facts }) => {
  if (!nullModelOf(plan.null).needsWholeWindow) return null;
  const widest = widestKernel(facts.kernels);
  const window = plan.epoch.toS - plan.epoch.fromS;
  if (window >= widthsForShifts * widest.timeFwhmS) return null;
  return {
    code: 'short-window-for-shifts',
    severity: 'attention',
    message: `A window of ${said(window)} s holds only ${said(window / widest.timeFwhmS)} kernel widths at ${said(widest.frequencyHz, 3)} Hz: shifts inside it differ little, so this null is coarse. Lengthen the window or choose trial-shuffled.`,
  };
};

export const coarseP: CautionRule = ({ plan, facts }) => {
  const { alpha, permutations } = plan.test;
  const spread = 1.96 * Math.sqrt(alpha * (1 - alpha));
  const halfWidth = spread / Math.sqrt(permutations);
  if (facts.smallestP > alpha || halfWidth <= coarseShare * alpha) return null;
  const wanted = Math.ceil((spread / (coarseShare * alpha)) ** 2 / 100) * 100;
  return {
    code: 'coarse-p',
    severity: 'note',
    message: `With ${said(permutations)} permutations a p near ${said(alpha)} is known to ±${said(halfWidth)} only; ${said(wanted)} make it ±${said(coarseShare * alpha)}.`,
  };
};

/**
 * The observed value is standardised by surrogates that it is none of, so the largest |z| of few
 * permutations is passed a little too often: in 400 simulated data sets without an effect, alpha
 * 0.05 gave 39 claims at 99 permutations, 26 at 299 and 24 at 999, where 20 are due
 * (tests/engine/null/calibration.test.ts holds 299).
 */
const enoughForMaxima = 500;

export const fewForMaxima: CautionRule = ({ plan }) => {
  const { corrections, permutations } = plan.test;
  const usesMaxima = corrections.some((id) => correctionOf(id).family === 'family-wise');
  if (!usesMaxima || permutations >= enoughForMaxima) return null;
  return {
    code: 'few-for-maxima',
    severity: 'attention',
    message: `With ${said(permutations)} permutations the family-wise error runs above alpha: the z of the null come from few surrogates. Ask for ${said(enoughForMaxima)} or more.`,
  };
};

export const synchronyInBoth: CautionRule = ({ plan }) => {
  const message = nullCaution(plan.null);
  return message === null ? null : { code: 'synchrony-in-both', severity: 'attention', message };
};

export const windowTooLong: CautionRule = ({ plan, window }) => {
  const { mostWindowSamples, name } = nullModelOf(plan.null);
  if (window.count <= mostWindowSamples) return null;
  return {
    code: 'window-too-long',
    severity: 'stop',
    message: `A window of ${said(window.count)} samples is too long for the null "${name}", which takes ${said(mostWindowSamples)}: shorten the window.`,
  };
};

export const measureCaution: CautionRule = ({ plan }) => {
  const { caution, shortName } = measureOf(plan.measure);
  return caution === null
    ? null
    : { code: 'measure', severity: 'note', message: `${shortName}: ${caution}` };
};

export const clusterClaim: CautionRule = ({ plan }) =>
  plan.test.corrections.some((id) => id === 'cluster-mass' || id === 'cluster-size')
    ? {
        code: 'cluster-claim',
        severity: 'note',
        message:
          'A significant cluster is a claim about the cluster as a whole, not about each of its points, its onset or its extent.',
      }
    : null;

export const claimOfNeighbours: CautionRule = ({ plan }) => {
  const messages = plan.test.corrections
    .filter((id) => id === 'threshold-free-enhancement' || id === 'network-components')
    .map((id) => `${correctionOf(id).name}: ${correctionOf(id).caution}`);
  if (messages.length === 0) return null;
  return { code: 'claim-of-neighbours', severity: 'note', message: messages.join(' ') };
};

export const falseDiscoveryDependence: CautionRule = ({ plan }) =>
  plan.test.corrections.includes('benjamini-hochberg')
    ? {
        code: 'false-discovery-dependence',
        severity: 'note',
        message:
          'Benjamini–Hochberg bounds the expected share of false claims, not the chance of any, and assumes independent or positively dependent tests.',
      }
    : null;
