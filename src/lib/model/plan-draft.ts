import { z } from 'zod';
import { correctionIds, measureIds, nullIds, type Plan, type Rule, type Settings } from '$engine';
import { numberText } from './number-text';
import { newPhaseDraft, phaseDraftSchema, phaseToDraft, withPhase } from './phase-draft';

// What a person has typed so far. Numbers stay text, so that "abc" or an empty field survives a
// reload and is reported beside its field; values of a choice that is not taken now are kept too.
const typed = z.string().max(400);
const names = z.array(z.string().max(1000)).max(2000);

const ruleDraftSchema = z.strictObject({
  kind: z.enum(['events', 'even']),
  /** SHA-256 of the recording, or empty until one is chosen. */
  recording: z.string().max(64),
  labels: names,
  fromS: typed,
  toS: typed,
  everyS: typed,
});

const conditionDraftSchema = z.strictObject({
  name: typed,
  rules: z.array(ruleDraftSchema).max(50),
});

const wholeDraftSchema = z.strictObject({
  format: z.literal('nullwright-draft/1'),
  question: z.string().max(4000),
  participant: typed,
  a: conditionDraftSchema,
  b: conditionDraftSchema,
  epoch: z.strictObject({
    fromS: typed,
    toS: typed,
    detrend: z.enum(['mean', 'line']),
    reference: z.enum(['recorded', 'average', 'channels', 'laplacian']),
    referenceSites: names,
    aboveUv: typed,
    flatBelowUv: typed,
    byHand: z
      .array(z.strictObject({ recording: z.string().max(64), onsetS: z.number() }))
      .max(100_000),
  }),
  sites: names,
  pairs: z.strictObject({
    kind: z.enum(['all', 'within', 'between', 'from']),
    within: names,
    first: names,
    second: names,
    from: typed,
  }),
  frequencies: z.strictObject({
    kind: z.enum(['grid', 'list']),
    fromHz: typed,
    toHz: typed,
    steps: typed,
    spacing: z.enum(['log', 'linear']),
    list: z.string().max(4000),
  }),
  phase: phaseDraftSchema,
  times: z.strictObject({ fromS: typed, toS: typed, stepS: typed }),
  measure: z.enum(measureIds),
  /** What measures and nulls ask for besides, as `id.key`; absent: as they begin. */
  settings: z.record(z.string().max(100), typed).default({}),
  null: z.enum(nullIds),
  test: z.strictObject({
    tail: z.enum(['two-sided', 'a-greater', 'b-greater']),
    alpha: typed,
    permutations: typed,
    /** The first carries the claim. */
    corrections: z.array(z.enum(correctionIds)).max(20),
    clusterFormingZ: typed,
    seed: typed,
  }),
});

export const planDraftSchema = z.preprocess(withPhase, wholeDraftSchema);

export type PlanDraft = z.infer<typeof planDraftSchema>;
export type ConditionDraft = PlanDraft['a'];
export type RuleDraft = ConditionDraft['rules'][number];

export function newRule(kind: RuleDraft['kind'], recording = ''): RuleDraft {
  return { kind, recording, labels: [], fromS: '0', toS: '', everyS: '1' };
}

/** A plan to start from; nothing in it depends on a recording yet. */
export function newDraft(question: string, seed: string): PlanDraft {
  return {
    format: 'nullwright-draft/1',
    question,
    participant: '',
    a: { name: '', rules: [] },
    b: { name: '', rules: [] },
    epoch: {
      fromS: '−0.2',
      toS: '0.8',
      detrend: 'mean',
      reference: 'recorded',
      referenceSites: [],
      aboveUv: '150',
      flatBelowUv: '0.5',
      byHand: [],
    },
    sites: [],
    pairs: { kind: 'all', within: [], first: [], second: [], from: '' },
    frequencies: {
      kind: 'grid',
      fromHz: '4',
      toHz: '30',
      steps: '14',
      spacing: 'log',
      list: '',
    },
    phase: newPhaseDraft(),
    times: { fromS: '0', toS: '0.6', stepS: '0.05' },
    measure: 'ispc',
    settings: {},
    null: 'labels',
    test: {
      tail: 'two-sided',
      alpha: '0.05',
      permutations: '1000',
      corrections: ['cluster-mass', 'max-statistic'],
      clusterFormingZ: '2.5',
      seed,
    },
  };
}

function ruleToDraft(rule: Rule): RuleDraft {
  const empty = newRule(rule.kind, rule.recording);
  if (rule.kind === 'events') return { ...empty, labels: [...rule.labels] };
  return {
    ...empty,
    fromS: numberText(rule.fromS),
    toS: numberText(rule.toS),
    everyS: numberText(rule.everyS),
  };
}

function settingsToDraft(id: string, settings: Settings = {}): PlanDraft['settings'] {
  return Object.fromEntries(
    Object.entries(settings).map(([key, value]) => [
      settingKey(id, key),
      typeof value === 'number' ? numberText(value) : value,
    ]),
  );
}

/** Where the draft keeps what an entry of a registry asks for. */
export function settingKey(id: string, key: string): string {
  return `${id}.${key}`;
}

function pairsToDraft(pairs: Plan['pairs'], empty: PlanDraft['pairs']): PlanDraft['pairs'] {
  switch (pairs.kind) {
    case 'all':
      return empty;
    case 'within':
      return { ...empty, kind: 'within', within: [...pairs.sites] };
    case 'between':
      return { ...empty, kind: 'between', first: [...pairs.first], second: [...pairs.second] };
    case 'from':
      return { ...empty, kind: 'from', from: pairs.site };
  }
}

function frequenciesToDraft(
  rule: Plan['phase']['frequencies'],
  empty: PlanDraft['frequencies'],
): PlanDraft['frequencies'] {
  if (rule.kind === 'list') {
    return { ...empty, kind: 'list', list: rule.hz.map(numberText).join(', ') };
  }
  return {
    ...empty,
    kind: 'grid',
    fromHz: numberText(rule.fromHz),
    toHz: numberText(rule.toHz),
    steps: numberText(rule.steps),
    spacing: rule.spacing,
  };
}

function epochToDraft(epoch: Plan['epoch']): PlanDraft['epoch'] {
  const { reference, reject } = epoch;
  return {
    fromS: numberText(epoch.fromS),
    toS: numberText(epoch.toS),
    detrend: epoch.detrend,
    reference: reference.kind,
    referenceSites: reference.kind === 'channels' ? [...reference.sites] : [],
    aboveUv: reject.aboveUv === null ? '' : numberText(reject.aboveUv),
    flatBelowUv: reject.flatBelowUv === null ? '' : numberText(reject.flatBelowUv),
    byHand: reject.byHand.map((mark) => ({ ...mark })),
  };
}

/** The form's state for a plan: the start of a new version, or a locked plan to read. */
export function planToDraft(plan: Plan): PlanDraft {
  const empty = newDraft(plan.question, plan.test.seed);
  return {
    ...empty,
    participant: plan.participant,
    a: { name: plan.a.name, rules: plan.a.rules.map(ruleToDraft) },
    b: { name: plan.b.name, rules: plan.b.rules.map(ruleToDraft) },
    epoch: epochToDraft(plan.epoch),
    sites: [...plan.sites],
    pairs: pairsToDraft(plan.pairs, empty.pairs),
    frequencies: frequenciesToDraft(plan.phase.frequencies, empty.frequencies),
    phase: phaseToDraft(plan.phase),
    times: {
      fromS: numberText(plan.times.fromS),
      toS: numberText(plan.times.toS),
      stepS: numberText(plan.times.stepS),
    },
    measure: plan.measure,
    settings: {
      ...settingsToDraft(plan.measure, plan.measureSettings),
      ...settingsToDraft(plan.null, plan.nullSettings),
    },
    null: plan.null,
    test: {
      tail: plan.test.tail,
      alpha: numberText(plan.test.alpha),
      permutations: numberText(plan.test.permutations),
      corrections: [...plan.test.corrections],
      clusterFormingZ: numberText(plan.test.clusterFormingZ),
      seed: plan.test.seed,
    },
  };
}
