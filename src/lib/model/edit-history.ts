/** Edits this close together are one step: a typed word, not its letters. */
const groupMs = 800;
const mostSteps = 200;

/** Undo and redo over whole states as text; knows nothing of forms. */
export class EditHistory {
  #past: string[] = [];
  #future: string[] = [];
  #present: string;
  #lastEditMs = -Infinity;

  constructor(present: string) {
    this.#present = present;
  }

  get canUndo(): boolean {
    return this.#past.length > 0;
  }

  get canRedo(): boolean {
    return this.#future.length > 0;
  }

  /** Remembers an edit; false when nothing differs. */
  edit(next: string, nowMs: number): boolean {
    if (next === this.#present) return false;
    if (nowMs - this.#lastEditMs > groupMs) this.#past.push(this.#present);
    if (this.#past.length > mostSteps) this.#past.shift();
    this.#lastEditMs = nowMs;
    this.#present = next;
    this.#future = [];
    return true;
  }

  /** A step of its own, whatever came just before: a whole state that replaces another. */
  replace(next: string): void {
    if (next === this.#present) return;
    this.#past.push(this.#present);
    this.#present = next;
    this.#future = [];
    this.#lastEditMs = -Infinity;
  }

  undo(): string | null {
    const previous = this.#past.pop();
    if (previous === undefined) return null;
    this.#future.push(this.#present);
    return this.#goTo(previous);
  }

  redo(): string | null {
    const next = this.#future.pop();
    if (next === undefined) return null;
    this.#past.push(this.#present);
    return this.#goTo(next);
  }

  #goTo(state: string): string {
    this.#present = state;
    this.#lastEditMs = -Infinity;
    return state;
  }
}
