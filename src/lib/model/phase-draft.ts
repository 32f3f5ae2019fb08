import { z } from 'zod';
import { phaseMethod, phaseMethodIds, phaseMethods, type PhaseField, type Plan } from '$engine';
import { numberText } from './number-text';

/** What was typed for one method: text by the field's path. */
type Typed = Record<string, string>;

const typedSchema = z.record(z.string().max(40), z.record(z.string().max(80), z.string().max(400)));

/**
 * The phase method and what was typed for each of them: going back to a method finds its settings
 * as they were. Fields that a draft does not know yet start as in a new plan.
 */
export const phaseDraftSchema = z
  .strictObject({ method: z.enum(phaseMethodIds), typed: typedSchema })
  .transform(({ method, typed }) => ({ method, typed: filled(typed) }));

export type PhaseDraft = z.output<typeof phaseDraftSchema>;

function filled(typed: Record<string, Typed>): Record<string, Typed> {
  return Object.fromEntries(
    phaseMethods.map(({ id, fields }) => [
      id,
      Object.fromEntries(fields.map(({ path, initial }) => [path, typed[id]?.[path] ?? initial])),
    ]),
  );
}

export function newPhaseDraft(): PhaseDraft {
  return { method: phaseMethodIds[0], typed: filled({}) };
}

export function phaseToDraft(phase: Plan['phase']): PhaseDraft {
  const { fields } = phaseMethod(phase.method);
  const typed = Object.fromEntries(fields.map((field) => [field.path, settingText(phase, field)]));
  return { method: phase.method, typed: filled({ [phase.method]: typed }) };
}

/** The value of a method's setting, or undefined where the plan's method has no such setting. */
export function settingOf(phase: Plan['phase'], path: string): unknown {
  return path
    .split('.')
    .reduce<unknown>(
      (at, key) =>
        typeof at === 'object' && at !== null ? (at as Record<string, unknown>)[key] : undefined,
      phase,
    );
}

function settingText(phase: Plan['phase'], { path }: PhaseField): string {
  const value = settingOf(phase, path);
  return typeof value === 'number' ? numberText(value) : String(value);
}

/** The chosen method's settings as a plan holds them; `read` turns a field's text into its number. */
export function phaseSettings(
  { method, typed }: PhaseDraft,
  read: (field: string, text: string) => number,
): Record<string, unknown> {
  const settings: Record<string, unknown> = { method };
  for (const { path, kind, initial } of phaseMethod(method).fields) {
    const text = typed[method]?.[path] ?? initial;
    put(settings, path.split('.'), kind === 'number' ? read(`phase.${path}`, text) : text);
  }
  return settings;
}

function put(target: Record<string, unknown>, [key, ...rest]: string[], value: unknown): void {
  if (rest.length === 0) {
    target[key] = value;
    return;
  }
  const inner = (target[key] ?? {}) as Record<string, unknown>;
  target[key] = inner;
  put(inner, rest, value);
}

/** Drafts from before there were several methods hold the wavelets' cycles only. */
export function withPhase(draft: unknown): unknown {
  if (typeof draft !== 'object' || draft === null || 'phase' in draft || !('cycles' in draft)) {
    return draft;
  }
  const { cycles, ...rest } = draft as { cycles: { from?: unknown; to?: unknown } | null };
  const morlet = { 'cycles.from': cycles?.from, 'cycles.to': cycles?.to };
  return { ...rest, phase: { method: 'morlet', typed: { morlet } } };
}
