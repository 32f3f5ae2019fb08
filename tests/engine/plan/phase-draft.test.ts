import { describe, expect, it } from 'vitest';
import { newDraft, planDraftSchema } from '$lib/model/plan-draft';

describe('drafts of phase methods', () => {
  it('reads a draft from before there were several methods, with its cycles', () => {
    const { phase, ...rest } = newDraft('?', 'tide');
    expect(phase.method).toBe('morlet');
    const draft = planDraftSchema.parse({ ...rest, cycles: { from: '3', to: 'abc' } });
    expect(draft.phase.method).toBe('morlet');
    expect(draft.phase.typed.morlet).toEqual({ 'cycles.from': '3', 'cycles.to': 'abc' });
    expect(draft.phase.typed.stft).toEqual(phase.typed.stft);
  });

  it('keeps what was typed for a method that is not chosen now', () => {
    const draft = newDraft('?', 'tide');
    draft.phase.typed.stft.taperS = '0.4';
    expect(planDraftSchema.parse(draft).phase).toEqual(draft.phase);
  });
});
