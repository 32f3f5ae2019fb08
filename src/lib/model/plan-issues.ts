import type { z } from 'zod';

/** One thing that keeps a plan from being locked; `field` is a path of the plan, joined by dots. */
export interface PlanIssue {
  field: string;
  message: string;
  /** Nothing was given yet: to be said when asked, not held against someone who just began. */
  missing?: true;
}

/** Empty text and empty lists are not yet given, everything else is wrong. */
function isMissing(value: unknown): boolean {
  return value === undefined || value === '' || (Array.isArray(value) && value.length === 0);
}

// What to do about a field that is still empty, where the schema's words do not say it.
const firstWords: Record<string, string> = {
  participant: 'Choose a participant.',
  'a.name': 'Give A a name.',
  'b.name': 'Give B a name.',
  'pairs.site': 'Choose the site that all pairs start from.',
};

export function planIssue(field: string, message: string, value: unknown): PlanIssue {
  if (!isMissing(value)) return { field, message };
  return { field, message: firstWords[field] ?? message, missing: true };
}

type ZodIssue = z.core.$ZodIssue;

/** Paths into lists belong to the list's field, except the rules, which have fields of their own. */
export function fieldOf(path: PropertyKey[]): string {
  const parts = path.map(String);
  const cut = parts.findIndex((part, i) => /^\d+$/.test(part) && parts[i - 1] !== 'rules');
  return (cut < 0 ? parts : parts.slice(0, cut)).join('.');
}

function valueAt(source: unknown, path: PropertyKey[]): unknown {
  return path.reduce<unknown>(
    (value, key) =>
      typeof value === 'object' && value !== null
        ? (value as Record<PropertyKey, unknown>)[key]
        : undefined,
    source,
  );
}

function quantity(issue: { origin: string }, limit: number | bigint): string {
  const n = String(limit).replace('-', '−');
  if (issue.origin === 'string') return `${n} characters`;
  if (issue.origin === 'array') return `${n} entries`;
  return n;
}

// Zod's own sentences are for programmers; a message given in the schema wins.
const ownWords = /^(must|choose|needs|say|give|names)\b/;

function requirement(issue: ZodIssue): string {
  if (ownWords.test(issue.message)) return issue.message;
  switch (issue.code) {
    case 'too_small': {
      if (issue.origin === 'string') return 'must not be empty';
      const bound = issue.inclusive === false ? 'above' : 'at least';
      return `must be ${bound} ${quantity(issue, issue.minimum)}`;
    }
    case 'too_big': {
      const bound = issue.inclusive === false ? 'below' : 'at most';
      return `must be ${bound} ${quantity(issue, issue.maximum)}`;
    }
    case 'invalid_type':
      return issue.expected === 'int' ? 'must be a whole number' : `must be a ${issue.expected}`;
    case 'invalid_value':
      return `must be one of ${issue.values.map(String).join(', ')}`;
    default:
      return 'is not understood; choose it anew';
  }
}

function shown(value: unknown): string {
  if (typeof value === 'number') return ` (it is ${String(value).replace('-', '−')})`;
  if (typeof value === 'string' && value !== '') {
    return ` (it is "${value.length > 40 ? `${value.slice(0, 40)}…` : value}")`;
  }
  return '';
}

function sentence(text: string): string {
  return `${text.charAt(0).toUpperCase()}${text.slice(1)}.`;
}

/** A schema's issues as sentences that name the value and the remedy. */
export function issuesOf(error: { issues: ZodIssue[] }, input: unknown): PlanIssue[] {
  return error.issues.map((issue) => {
    const value = valueAt(input, issue.path);
    const message = sentence(`${requirement(issue)}${shown(value)}`);
    return planIssue(fieldOf(issue.path), message, value);
  });
}
