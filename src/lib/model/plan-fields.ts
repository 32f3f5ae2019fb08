import { phaseMethods, type PhaseField } from '$engine';

/**
 * The name of each choice of a plan, in the words of the form, by its path in the plan. Issues and
 * lists of changes use the same words.
 */
const names: Record<string, string> = {
  question: 'Question',
  participant: 'Participant',
  recordings: 'Recordings',
  'a.name': 'Name of A',
  'a.rules': 'Epochs of A',
  'b.name': 'Name of B',
  'b.rules': 'Epochs of B',
  'epoch.fromS': 'Window, from',
  'epoch.toS': 'Window, to',
  'epoch.detrend': 'Detrend',
  'epoch.reference': 'Reference',
  'epoch.reject.aboveUv': 'Leave out above',
  'epoch.reject.flatBelowUv': 'Flat below',
  'epoch.reject.byHand': 'Epochs marked by hand',
  sites: 'Sites',
  pairs: 'Pairs',
  'phase.method': 'Phase method',
  'phase.frequencies': 'Frequencies',
  'phase.frequencies.fromHz': 'Frequencies, from',
  'phase.frequencies.toHz': 'Frequencies, to',
  'phase.frequencies.steps': 'Frequencies, steps',
  times: 'Times',
  'times.fromS': 'Times, from',
  'times.toS': 'Times, to',
  'times.stepS': 'Times, every',
  measure: 'Measure',
  measureSettings: 'Measure, settings',
  null: 'Null',
  nullSettings: 'Null, settings',
  'test.tail': 'Tail',
  'test.alpha': 'Alpha',
  'test.permutations': 'Permutations',
  'test.corrections': 'Corrections',
  'test.clusterFormingZ': 'Cluster-forming z',
  'test.seed': 'Seed',
};

for (const { path, name } of phaseMethods.flatMap<PhaseField>((method) => method.fields)) {
  names[`phase.${path}`] = name;
}

/** The form's word for a path; a path without one is named by the nearest above it that has. */
export function fieldName(path: string): string {
  for (let at = path; at !== ''; at = at.slice(0, Math.max(0, at.lastIndexOf('.')))) {
    if (names[at]) return names[at];
  }
  return path;
}
