import { readView, writeView, type View, type ViewContext } from './selection-query';

type Write = (query: string, how: { replace: boolean }) => void;

/** Arrow keys move many steps a second; the address follows when they rest. */
const restMs = 200;

/**
 * The one selection that all figures share. The address is its memory: a view can be shared, and
 * Back returns to the pair before. Figures change at once; the address follows.
 */
export class Selection {
  #view = $state.raw<View>({ pair: 0, point: 0, correction: '', across: 'peaks' });
  /** The view as the address has it, and the query's other parameters with it. */
  #query: string;
  #settled: View;
  #timer: ReturnType<typeof setTimeout> | undefined;

  constructor(
    private readonly context: () => ViewContext,
    private readonly write: Write,
    query: string,
  ) {
    this.#query = query;
    this.#settled = readView(query, context());
    this.#view = this.#settled;
  }

  get pair() {
    return this.#view.pair;
  }
  get point() {
    return this.#view.point;
  }
  get correction() {
    return this.#view.correction;
  }
  get across() {
    return this.#view.across;
  }
  get frequencyIndex() {
    return Math.floor(this.#view.point / this.context().axes.timesS.length);
  }
  get timeIndex() {
    return this.#view.point % this.context().axes.timesS.length;
  }

  /** Takes over what the address says: on arrival, Back and Forward. */
  follow(query: string): void {
    if (this.#timer !== undefined) return;
    this.#query = query;
    this.#settled = readView(query, this.context());
    this.#view = this.#settled;
  }

  /** A pair, and the point where it is strongest. */
  choosePair(pair: number, point = this.#view.point): void {
    if (pair < 0 || (pair === this.#view.pair && point === this.#view.point)) return;
    this.#change({ pair, point });
  }

  choosePoint(point: number): void {
    if (point !== this.#view.point) this.#change({ point });
  }

  chooseCorrection(correction: string): void {
    this.#change({ correction });
    this.#settle();
  }

  chooseAcross(across: View['across']): void {
    this.#change({ across });
  }

  /** Writes what is still waiting; call it before the page goes. */
  leave(): void {
    clearTimeout(this.#timer);
    this.#timer = undefined;
  }

  #change(change: Partial<View>): void {
    const before = this.#view;
    this.#view = { ...before, ...change };
    clearTimeout(this.#timer);
    this.#timer = setTimeout(() => this.#settle(), restMs);
  }

  #settle(): void {
    this.leave();
    const { pair, correction } = this.#settled;
    const replace = pair === this.#view.pair && correction === this.#view.correction;
    this.#query = writeView(this.#query, this.#view, this.context());
    this.#settled = this.#view;
    this.write(this.#query, { replace });
  }
}
