import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { newDraft, type PlanDraft } from '$lib/model/plan-draft';
import { Autosave } from '../../../src/routes/(app)/contrasts/[contrastId=uuid]/define/autosave.svelte';
import { keptDraft } from '../../../src/routes/(app)/contrasts/[contrastId=uuid]/define/draft-keeper';

interface Sent {
  version: number;
  basedOn: number;
  draft: PlanDraft;
}

/** Answers the next requests in turn; the last answer stands for all that follow. */
function serverThat(...answers: ((sent: Sent) => Response | Promise<Response>)[]): Sent[] {
  const sent: Sent[] = [];
  vi.stubGlobal('fetch', async (_address: string, init: { body: string }) => {
    const body = JSON.parse(init.body) as Sent;
    sent.push(body);
    return answers[Math.min(sent.length, answers.length) - 1](body);
  });
  return sent;
}

const savedAt = '2026-11-24T10:00:00.000Z';
const saves = ({ basedOn }: Sent) =>
  Response.json({ state: 'saved', revision: basedOn + 1, savedAt });
const fails = () => Promise.reject(new TypeError('network'));
const asked = (question: string) => newDraft(question, 'tide-2');
const start = { contrastId: 'c', version: 1, revision: 4, savedAt };

beforeEach(() => {
  vi.useFakeTimers();
  const kept = new Map<string, string>();
  vi.stubGlobal('localStorage', {
    getItem: (key: string) => kept.get(key) ?? null,
    setItem: (key: string, value: string) => kept.set(key, value),
    removeItem: (key: string) => kept.delete(key),
  });
});
afterEach(() => {
  vi.useRealTimers();
  vi.unstubAllGlobals();
});

describe('Autosave', () => {
  it('sends the last state once the typing pauses, based on the revision it knows', async () => {
    const sent = serverThat(saves);
    const save = new Autosave(start);
    save.note(asked('a'));
    save.note(asked('ab'));
    await vi.runAllTimersAsync();
    expect(sent).toEqual([{ version: 1, basedOn: 4, draft: asked('ab') }]);
    expect(save.state).toBe('saved');
    expect(save.revision).toBe(5);
  });

  it('sends what was typed while a save was under way, on top of it', async () => {
    const save = new Autosave(start);
    const sent = serverThat((first) => {
      save.note(asked('second'));
      return saves(first);
    }, saves);
    save.note(asked('first'));
    expect(await save.flush()).toBe(true);
    expect(sent.map(({ basedOn, draft }) => [basedOn, draft.question])).toEqual([
      [4, 'first'],
      [5, 'second'],
    ]);
  });

  it('keeps what cannot be sent in this browser, tries again, and then forgets it', async () => {
    const sent = serverThat(fails, saves);
    const save = new Autosave(start);
    save.note(asked('offline'));
    await save.flush();
    expect(save.state).toBe('failed');
    expect(keptDraft('c', 1)).toMatchObject({ draft: asked('offline'), basedOn: 4 });
    await vi.runAllTimersAsync();
    expect(sent).toHaveLength(2);
    expect(save.state).toBe('saved');
    expect(keptDraft('c', 1)).toBeNull();
  });

  it('says so when the browser keeps nothing either', async () => {
    serverThat(fails);
    vi.stubGlobal('localStorage', undefined);
    const save = new Autosave(start);
    save.note(asked('offline'));
    await save.flush();
    expect(save.unkept).toBe(true);
    save.stop();
  });

  it('never sends over a newer draft, and keeps its own until it is settled', async () => {
    const newer = { state: 'newer', revision: 7, savedAt, savedByName: 'I. Marlow' };
    const sent = serverThat(
      () => Response.json({ ...newer, draft: asked('theirs') }, { status: 409 }),
      saves,
    );
    const save = new Autosave(start);
    save.note(asked('mine'));
    await save.flush();
    expect(save.newer).toMatchObject({ savedByName: 'I. Marlow', draft: asked('theirs') });
    save.note(asked('mine, longer'));
    expect(await save.flush()).toBe(false);
    await vi.runAllTimersAsync();
    expect(sent).toHaveLength(1);
    expect(keptDraft('c', 1)?.draft).toEqual(asked('mine, longer'));
    save.settle(asked('mine, longer'), true);
    expect(await save.flush()).toBe(true);
    expect(sent[1]).toMatchObject({ basedOn: 7, draft: asked('mine, longer') });
  });

  it('takes a server error for a failure, not for a save', async () => {
    serverThat(() => new Response('broken', { status: 500 }));
    const save = new Autosave(start);
    save.note(asked('a'));
    expect(await save.flush()).toBe(false);
    expect(save.state).toBe('failed');
    save.stop();
  });

  it('keeps the draft before the page goes', async () => {
    serverThat(saves);
    const save = new Autosave(start);
    save.note(asked('leaving'));
    save.leave();
    expect(keptDraft('c', 1)?.draft).toEqual(asked('leaving'));
    await vi.runAllTimersAsync();
    expect(keptDraft('c', 1)).toBeNull();
  });
});
