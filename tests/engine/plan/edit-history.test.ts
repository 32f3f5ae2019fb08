import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { EditHistory } from '$lib/model/edit-history';

describe('EditHistory', () => {
  it('takes edits close in time as one step, and later ones as another', () => {
    const history = new EditHistory('');
    history.edit('a', 0);
    history.edit('ab', 100);
    history.edit('abc', 5000);
    expect(history.undo()).toBe('ab');
    expect(history.undo()).toBe('');
    expect(history.undo()).toBeNull();
  });

  it('makes no step of a state that did not change', () => {
    const history = new EditHistory('a');
    expect(history.edit('a', 0)).toBe(false);
    expect(history.canUndo).toBe(false);
  });

  it('forgets what could be redone when something new is edited', () => {
    const history = new EditHistory('a');
    history.edit('b', 0);
    history.undo();
    history.edit('c', 10_000);
    expect(history.redo()).toBeNull();
    expect(history.undo()).toBe('a');
  });

  it('never joins an edit with what was undone or replaced just before', () => {
    const history = new EditHistory('a');
    history.edit('b', 0);
    history.replace('theirs');
    history.edit('theirs, edited', 10);
    expect(history.undo()).toBe('theirs');
    expect(history.undo()).toBe('b');
  });

  it('comes back to every state by redo after undoing all', () => {
    fc.assert(
      fc.property(fc.uniqueArray(fc.string({ minLength: 1 }), { maxLength: 30 }), (states) => {
        const history = new EditHistory('');
        states.forEach((state, i) => history.edit(state, i * 10_000));
        for (const state of ['', ...states.slice(0, -1)].reverse()) {
          if (states.length > 0) expect(history.undo()).toBe(state);
        }
        for (const state of states) expect(history.redo()).toBe(state);
        expect(history.canRedo).toBe(false);
      }),
    );
  });
});
