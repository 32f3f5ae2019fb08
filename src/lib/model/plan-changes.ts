import {
  correctionOf,
  measureOf,
  nullModelOf,
  phaseMethod,
  type Plan,
  type Rule,
  type SettingField,
  type Settings,
} from '$engine';
import { settingOf } from './phase-draft';
import { fieldName } from './plan-fields';

/** One choice that differs between two versions of a plan, before and after in words. */
export interface PlanChange {
  field: string;
  name: string;
  before: string;
  after: string;
}

const number = (value: number): string => String(value).replace('-', '−');
const seconds = (value: number): string => `${number(value)} s`;
const limit = (value: number | null): string =>
  value === null ? 'not used' : `${number(value)} µV`;

function list(values: readonly string[], most = 8): string {
  if (values.length <= most) return values.join(', ');
  return `${values.slice(0, most).join(', ')} and ${values.length - most} more`;
}

function ruleWords(rule: Rule, fileName: (sha256: string) => string): string {
  const where = fileName(rule.recording);
  if (rule.kind === 'events') return `events ${list(rule.labels)} of ${where}`;
  const span = `${seconds(rule.fromS)} to ${seconds(rule.toS)}`;
  return `every ${seconds(rule.everyS)} from ${span} of ${where}`;
}

function pairWords(pairs: Plan['pairs']): string {
  switch (pairs.kind) {
    case 'all':
      return 'all';
    case 'within':
      return `within ${list(pairs.sites)}`;
    case 'between':
      return `between ${list(pairs.first)} and ${list(pairs.second)}`;
    case 'from':
      return `from ${pairs.site}`;
  }
}

function frequencyWords(rule: Plan['phase']['frequencies']): string {
  if (rule.kind === 'list') return `${list(rule.hz.map(number), 20)} Hz`;
  const { fromHz, toHz, steps, spacing } = rule;
  return `${number(fromHz)} to ${number(toHz)} Hz, ${steps} ${spacing} steps`;
}

function referenceWords(reference: Plan['epoch']['reference']): string {
  if (reference.kind === 'recorded') return 'as recorded';
  if (reference.kind === 'average') return 'mean of all analysed sites';
  if (reference.kind === 'laplacian') return 'surface Laplacian of the analysed sites';
  return `mean of ${list(reference.sites)}`;
}

export const tailWords: Record<Plan['test']['tail'], string> = {
  'two-sided': 'two-sided',
  'a-greater': 'more in A',
  'b-greater': 'more in B',
};

/** "a block is a run of epochs; epochs or minutes in a block 20"; empty where nothing is asked. */
function settingWords(
  entry: { settings?: readonly SettingField[] },
  given: Settings | undefined,
): string {
  return (entry.settings ?? [])
    .map((setting) => {
      const value = given?.[setting.key] ?? setting.initial;
      if (setting.kind === 'number') {
        return `${setting.name} ${number(Number(value))}${setting.unit ? ` ${setting.unit}` : ''}`;
      }
      const chosen = setting.options.find((option) => option.value === value);
      return `${setting.name} ${chosen?.name ?? value}`;
    })
    .join('; ');
}

function phaseChoices(phase: Plan['phase']): [string, string, unknown][] {
  return phaseMethod(phase.method).fields.map((field) => {
    const value = settingOf(phase, field.path);
    const words =
      field.kind === 'choice'
        ? (field.options.find((option) => option.value === value)?.label ?? String(value))
        : `${number(value as number)}${field.unit ? ` ${field.unit}` : ''}`;
    return [`phase.${field.path}`, words, value];
  });
}

function correctionWords([claim, ...others]: Plan['test']['corrections']): string {
  const first = `${correctionOf(claim).name}, which carries the claim`;
  return [first, ...others.map((id) => correctionOf(id).name)].join('; ');
}

/** Everything a plan fixes, as [path, words, exact value]; the exact value decides on a change. */
function choices(plan: Plan): [string, string, unknown][] {
  const byHash = new Map(plan.recordings.map((each) => [each.sha256, each.name]));
  const fileName = (sha256: string) => byHash.get(sha256) ?? 'an unlisted recording';
  const rules = (which: Rule[]) => which.map((rule) => ruleWords(rule, fileName)).join('; ');
  const { epoch, phase, times, test } = plan;
  return [
    ['question', plan.question, plan.question],
    ['participant', plan.participant, plan.participant],
    ['recordings', list(plan.recordings.map((each) => each.name)), plan.recordings],
    ['a.name', plan.a.name, plan.a.name],
    ['a.rules', rules(plan.a.rules), plan.a.rules],
    ['b.name', plan.b.name, plan.b.name],
    ['b.rules', rules(plan.b.rules), plan.b.rules],
    ['epoch.fromS', seconds(epoch.fromS), epoch.fromS],
    ['epoch.toS', seconds(epoch.toS), epoch.toS],
    ['epoch.detrend', epoch.detrend === 'line' ? 'straight line' : 'mean', epoch.detrend],
    ['epoch.reference', referenceWords(epoch.reference), epoch.reference],
    ['epoch.reject.aboveUv', limit(epoch.reject.aboveUv), epoch.reject.aboveUv],
    ['epoch.reject.flatBelowUv', limit(epoch.reject.flatBelowUv), epoch.reject.flatBelowUv],
    ['epoch.reject.byHand', `${epoch.reject.byHand.length} marked`, epoch.reject.byHand],
    ['sites', `${plan.sites.length}: ${list(plan.sites, 600)}`, plan.sites],
    ['pairs', pairWords(plan.pairs), plan.pairs],
    ['phase.method', phaseMethod(phase.method).name, phase.method],
    ['phase.frequencies', frequencyWords(phase.frequencies), phase.frequencies],
    ...phaseChoices(phase),
    ['times.fromS', seconds(times.fromS), times.fromS],
    ['times.toS', seconds(times.toS), times.toS],
    ['times.stepS', seconds(times.stepS), times.stepS],
    ['measure', measureOf(plan.measure).name, plan.measure],
    [
      'measureSettings',
      settingWords(measureOf(plan.measure), plan.measureSettings),
      plan.measureSettings,
    ],
    ['null', nullModelOf(plan.null).name, plan.null],
    ['nullSettings', settingWords(nullModelOf(plan.null), plan.nullSettings), plan.nullSettings],
    ['test.tail', tailWords[test.tail], test.tail],
    ['test.alpha', number(test.alpha), test.alpha],
    ['test.permutations', test.permutations.toLocaleString('en'), test.permutations],
    ['test.corrections', correctionWords(test.corrections), test.corrections],
    ['test.clusterFormingZ', number(test.clusterFormingZ), test.clusterFormingZ],
    ['test.seed', test.seed, test.seed],
  ];
}

/**
 * Which choices of `now` differ from those of `before`, in the order of the form; settings of a phase
 * method that only one of the two has are said with it.
 */
export function planChanges(before: Plan, now: Plan): PlanChange[] {
  const old = choices(before);
  const next = choices(now);
  const both = [...next, ...old.filter(([field]) => !next.some(([other]) => other === field))];
  return both.flatMap(([field]) => {
    const [, beforeWords, beforeValue] = old.find(([other]) => other === field) ?? absent;
    const [, after, value] = next.find(([other]) => other === field) ?? absent;
    if (JSON.stringify(value) === JSON.stringify(beforeValue)) return [];
    return [{ field, name: fieldName(field), before: beforeWords, after }];
  });
}

const absent = ['', 'none', undefined] as const;

/** A plan as people read it: each choice by its name, in the order of the form. */
export function planInWords(plan: Plan): { field: string; name: string; words: string }[] {
  return choices(plan)
    .filter(([, words]) => words !== '')
    .map(([field, words]) => ({ field, name: fieldName(field), words }));
}
