import {
  measureOf,
  nullModelOf,
  planSchema,
  type Plan,
  type SettingField,
  type Settings,
} from '$engine';
import { readCount, readNumber } from './number-text';
import { settingKey, type ConditionDraft, type PlanDraft, type RuleDraft } from './plan-draft';
import { phaseSettings } from './phase-draft';
import { issuesOf, planIssue, type PlanIssue } from './plan-issues';

export type ParsedDraft =
  { plan: Plan; issues: [] } | { plan: null; issues: [PlanIssue, ...PlanIssue[]] };

/** Reads the draft's numbers, and remembers what was no number under the field's path. */
class NumberReader {
  readonly issues: PlanIssue[] = [];

  read(field: string, text: string, parse = readNumber): number {
    const value = parse(text);
    if (Number.isNaN(value)) {
      const typed = text.trim();
      const message = typed
        ? `Must be a number, such as 0.5 with a point (it is "${typed}").`
        : 'Must be filled in with a number.';
      this.issues.push(planIssue(field, message, typed));
    }
    return value;
  }

  /** An empty field means that the limit is not used. */
  limit(field: string, text: string): number | null {
    return text.trim() === '' ? null : this.read(field, text);
  }

  count(field: string, text: string): number {
    return this.read(field, text, readCount);
  }

  list(field: string, text: string): number[] {
    const parts = text.split(/[\s,;]+/).filter((part) => part !== '');
    return parts.map((part) => this.read(field, part));
  }
}

function rule(read: NumberReader, field: string, draft: RuleDraft) {
  const { kind, recording } = draft;
  if (recording === '') {
    read.issues.push(planIssue(`${field}.recording`, 'Choose a recording.', recording));
  }
  if (kind === 'events') return { kind, recording, labels: draft.labels };
  return {
    kind,
    recording,
    fromS: read.read(`${field}.fromS`, draft.fromS),
    toS: read.read(`${field}.toS`, draft.toS),
    everyS: read.read(`${field}.everyS`, draft.everyS),
  };
}

function condition(read: NumberReader, field: 'a' | 'b', draft: ConditionDraft) {
  return {
    name: draft.name,
    rules: draft.rules.map((each, i) => rule(read, `${field}.rules.${i}`, each)),
  };
}

function pairs(draft: PlanDraft['pairs']) {
  switch (draft.kind) {
    case 'all':
      return { kind: 'all' };
    case 'within':
      return { kind: 'within', sites: draft.within };
    case 'between':
      return { kind: 'between', first: draft.first, second: draft.second };
    case 'from':
      return { kind: 'from', site: draft.from };
  }
}

/** What an entry asks for, under `field`; nothing where it asks for nothing. */
function settingsOf(
  read: NumberReader,
  field: string,
  entry: { id: string; settings?: readonly SettingField[] },
  typed: PlanDraft['settings'],
): Record<string, Settings> {
  if (!entry.settings) return {};
  const values = entry.settings.map((setting): [string, number | string] => {
    const text = typed[settingKey(entry.id, setting.key)];
    if (text === undefined) return [setting.key, setting.initial];
    if (setting.kind === 'choice') return [setting.key, text];
    return [setting.key, read.read(`${field}.${setting.key}`, text)];
  });
  return { [field]: Object.fromEntries(values) };
}

function frequencies(read: NumberReader, draft: PlanDraft['frequencies']) {
  const field = 'phase.frequencies';
  if (draft.kind === 'list') return { kind: 'list', hz: read.list(`${field}.hz`, draft.list) };
  return {
    kind: 'grid',
    fromHz: read.read(`${field}.fromHz`, draft.fromHz),
    toHz: read.read(`${field}.toHz`, draft.toHz),
    steps: read.count(`${field}.steps`, draft.steps),
    spacing: draft.spacing,
  };
}

function epoch(read: NumberReader, draft: PlanDraft['epoch']) {
  return {
    fromS: read.read('epoch.fromS', draft.fromS),
    toS: read.read('epoch.toS', draft.toS),
    detrend: draft.detrend,
    reference:
      draft.reference === 'channels'
        ? { kind: 'channels', sites: draft.referenceSites }
        : { kind: draft.reference },
    reject: {
      aboveUv: read.limit('epoch.reject.aboveUv', draft.aboveUv),
      flatBelowUv: read.limit('epoch.reject.flatBelowUv', draft.flatBelowUv),
      byHand: draft.byHand,
    },
  };
}

/** The recordings that the rules name, in order of first mention. */
export function recordingsOf(draft: PlanDraft): string[] {
  const named = [...draft.a.rules, ...draft.b.rules].map((each) => each.recording);
  return [...new Set(named.filter((sha256) => sha256 !== ''))];
}

/**
 * Turns what was typed into a plan, or says for each field what is wrong with it.
 * `names` gives the file name of each recording by its SHA-256.
 */
export function draftToPlan(draft: PlanDraft, names: ReadonlyMap<string, string>): ParsedDraft {
  const read = new NumberReader();
  const input = {
    format: 'nullwright-plan/1',
    question: draft.question,
    participant: draft.participant,
    recordings: recordingsOf(draft).map((sha256) => ({
      sha256,
      name: names.get(sha256) ?? 'unknown recording',
    })),
    a: condition(read, 'a', draft.a),
    b: condition(read, 'b', draft.b),
    epoch: epoch(read, draft.epoch),
    sites: draft.sites,
    pairs: pairs(draft.pairs),
    phase: {
      ...phaseSettings(draft.phase, (field, text) => read.read(field, text)),
      frequencies: frequencies(read, draft.frequencies),
    },
    times: {
      fromS: read.read('times.fromS', draft.times.fromS),
      toS: read.read('times.toS', draft.times.toS),
      stepS: read.read('times.stepS', draft.times.stepS),
    },
    measure: draft.measure,
    ...settingsOf(read, 'measureSettings', measureOf(draft.measure), draft.settings),
    null: draft.null,
    ...settingsOf(read, 'nullSettings', nullModelOf(draft.null), draft.settings),
    test: {
      tail: draft.test.tail,
      alpha: read.read('test.alpha', draft.test.alpha),
      permutations: read.count('test.permutations', draft.test.permutations),
      corrections: draft.test.corrections,
      clusterFormingZ: read.read('test.clusterFormingZ', draft.test.clusterFormingZ),
      seed: draft.test.seed,
    },
  };
  const parsed = planSchema.safeParse(input);
  if (parsed.success) return { plan: parsed.data, issues: [] };
  const said = new Set(read.issues.map((issue) => issue.field));
  const rest = issuesOf(parsed.error, input).filter((issue) => !said.has(issue.field));
  const [first, ...others] = [...read.issues, ...rest];
  return { plan: null, issues: [first, ...others] };
}
