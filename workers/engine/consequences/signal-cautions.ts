import { phaseMethod } from '../phase/registry';
import { listed } from '../prepare/recordings';
import { said, widestKernel, type CautionRule } from './caution';

/** A browser tab's shared buffer much above this fails on common laptops. Common practice, no source. */
const mostSharedBytes = 2 ** 31;
/** Sites from which their mean comes near a neutral reference. Common practice, no source. */
const wantedForAverage = 20;
/** Sites from which a surface Laplacian resolves neighbours. Common practice, no source. */
const wantedForLaplacian = 32;
const mainsHz = [50, 60];

export const tooMuchMemory: CautionRule = ({ facts }) => {
  const { phaseBytes, drawBytes } = facts;
  if (Math.max(phaseBytes, drawBytes) <= mostSharedBytes) return null;
  const gigabytes = (bytes: number) => `${(bytes / 2 ** 30).toFixed(1)} GB`;
  const [what, less] =
    phaseBytes >= drawBytes
      ? ['phases', 'fewer sites, frequencies, times or epochs']
      : ["permutations' draws", 'fewer permutations, sites or epochs'];
  return {
    code: 'too-much-memory',
    severity: 'stop',
    message: `The ${what} would take ${gigabytes(Math.max(phaseBytes, drawBytes))}, and ${gigabytes(mostSharedBytes)} are the most: take ${less}.`,
  };
};

export const badSites: CautionRule = ({ plan, recordings }) => {
  const bad = recordings
    .filter((recording) => plan.recordings.some(({ sha256 }) => sha256 === recording.sha256))
    .flatMap((recording) =>
      recording.channels
        .filter((channel) => channel.bad && plan.sites.includes(channel.site))
        .map((channel) => `${channel.site} in ${recording.name}`),
    );
  if (bad.length === 0) return null;
  return {
    code: 'bad-site',
    severity: 'attention',
    message: `Marked bad, yet among the sites: ${listed(bad)}. Leave ${bad.length > 1 ? 'them' : 'it'} out unless you mean it.`,
  };
};

export const referenceAnalysed: CautionRule = ({ plan }) => {
  const { reference } = plan.epoch;
  if (reference.kind !== 'channels') return null;
  const shared = reference.sites.filter((site) => plan.sites.includes(site));
  if (shared.length === 0) return null;
  return {
    code: 'reference-analysed',
    severity: 'attention',
    message: `${listed(shared)} ${shared.length > 1 ? 'are' : 'is'} part of the reference and analysed too: such sites mirror each other by construction.`,
  };
};

export const referenceOfFew: CautionRule = ({ plan }) => {
  const count = plan.sites.length;
  if (plan.epoch.reference.kind !== 'average' || count >= wantedForAverage) return null;
  return {
    code: 'reference-of-few',
    severity: 'attention',
    message: `The mean of ${said(count)} sites is no neutral reference: it carries part of every site into all the others.`,
  };
};

export const laplacianOfFew: CautionRule = ({ plan }) => {
  const count = plan.sites.length;
  if (plan.epoch.reference.kind !== 'laplacian' || count >= wantedForLaplacian) return null;
  return {
    code: 'laplacian-of-few',
    severity: 'attention',
    message: `A surface Laplacian of ${said(count)} sites is coarse: it cannot tell neighbours apart, sites at the rim are guessed from one side, and all sites share their interpolation. From ${wantedForLaplacian} well-spread sites on it is dense enough.`,
  };
};

export const wideKernels: CautionRule = ({ plan, facts }) => {
  const widest = widestKernel(facts.kernels);
  const { fromS, toS } = plan.epoch;
  const kernel = `At ${said(widest.frequencyHz, 3)} Hz the kernel is ${said(widest.timeFwhmS)} s wide at half height`;
  if (widest.timeFwhmS > toS - fromS) {
    return {
      code: 'wide-kernels',
      severity: 'attention',
      message: `${kernel}, wider than the window of ${said(toS - fromS)} s: its phases come mostly from outside. Take ${phaseMethod(plan.phase.method).sharper}, a higher frequency or a longer window.`,
    };
  }
  const several = plan.times.toS - plan.times.fromS >= plan.times.stepS;
  if (!several || widest.timeFwhmS <= plan.times.stepS) return null;
  return {
    code: 'wide-kernels',
    severity: 'note',
    message: `${kernel}: times closer than that are not separate findings.`,
  };
};

export const phaseMethodCaution: CautionRule = ({ plan, axes }) => {
  const message = phaseMethod(plan.phase.method).caution(plan.phase, axes.frequenciesHz);
  return message === null ? null : { code: 'phase-method', severity: 'attention', message };
};

export const lineFrequency: CautionRule = ({ facts }) => {
  const near = facts.kernels.flatMap(({ frequencyHz, frequencyFwhmHz }) =>
    mainsHz.some((hz) => Math.abs(hz - frequencyHz) < frequencyFwhmHz / 2)
      ? [`${said(frequencyHz, 3)} Hz`]
      : [],
  );
  if (near.length === 0) return null;
  return {
    code: 'line-frequency',
    severity: 'attention',
    message: `The kernels at ${listed(near)} take in 50 or 60 Hz: mains hum is common to all sites and looks like synchrony.`,
  };
};

export const sharedSources: CautionRule = () => ({
  code: 'shared-sources',
  severity: 'note',
  message:
    'Sites can share sources and a reference (volume conduction). Edges with a lag near zero or half a turn will be marked.',
});
