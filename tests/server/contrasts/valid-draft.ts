import { newDraft, newRule, type PlanDraft } from '$lib/model/plan-draft';

/** Twenty events of each label, three seconds apart. */
export const tappingEvents = Array.from({ length: 40 }, (_, i) => ({
  onsetS: 2 + 2.5 * i,
  label: i % 2 ? 'tap/free' : 'tone/cued',
}));

/** A draft that can be locked on a recording made with `tappingEvents`. */
export function validDraft(sha256: string): PlanDraft {
  const draft = newDraft('Does the beat matter?', 'tide-2');
  draft.participant = 'P01';
  draft.a = { name: 'cued', rules: [{ ...newRule('events', sha256), labels: ['tone/cued'] }] };
  draft.b = { name: 'free', rules: [{ ...newRule('events', sha256), labels: ['tap/free'] }] };
  draft.sites = ['C3', 'C4', 'P3', 'P4'];
  return draft;
}
