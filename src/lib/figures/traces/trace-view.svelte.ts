/** The window of time that is seen. */
export interface Span {
  startS: number;
  widthS: number;
}

const SHORTEST_S = 0.05;
/** Time in which a movement covers most of its way. */
const EASE_MS = 70;

/** Where the traces look: the window of time, the rows, and the size of a microvolt. */
export class TraceView {
  /** Where the window is going; what the words beside the figure say. */
  target = $state.raw<Span>({ startS: 0, widthS: 10 });
  /** Microvolts in the height of a row. */
  microvoltsPerRow = $state(100);
  /** Whether the rows' height follows what is in view, until the person sets it. */
  isFitting = $state(true);
  rowsShown = $state(1);
  firstRow = $state(0);
  /** The channel that the keyboard acts on. */
  chosen = $state(0);
  /** What is drawn: follows the target. Not reactive, it changes every frame. */
  shown: Span = { startS: 0, widthS: 10 };
  /** For people who ask their system for less motion. */
  isStill = false;
  private fittedWidthS = 0;

  constructor(
    readonly rowCount: number,
    readonly startS: number,
    readonly endS: number,
  ) {
    this.rowsShown = rowCount <= 72 ? rowCount : 32;
    const widthS = Math.min(10, this.lengthS);
    this.target = { startS, widthS };
    this.shown = this.target;
  }

  get lengthS(): number {
    return Math.max(SHORTEST_S, this.endS - this.startS);
  }

  /** Goes to a window, kept within the recording; at once, or moving there. */
  show(span: Span, at: 'once' | 'ease'): void {
    const widthS = Math.min(this.lengthS, Math.max(SHORTEST_S, span.widthS));
    const startS = Math.min(this.endS - widthS, Math.max(this.startS, span.startS));
    this.target = { startS, widthS };
    if (at === 'once' || this.isStill) this.shown = this.target;
  }

  pan(seconds: number, at: 'once' | 'ease'): void {
    const { startS, widthS } = this.target;
    this.show({ startS: startS + seconds, widthS }, at);
  }

  /** Scales the window by `factor`; the moment `fixedS` keeps its place. */
  zoom(factor: number, fixedS: number, at: 'once' | 'ease'): void {
    const { startS, widthS } = this.target;
    const wanted = Math.min(this.lengthS, Math.max(SHORTEST_S, widthS * factor));
    const share = (fixedS - startS) / widthS;
    this.show({ startS: fixedS - share * wanted, widthS: wanted }, at);
  }

  get middleS(): number {
    return this.target.startS + this.target.widthS / 2;
  }

  /** The next step of 1, 2, 5 times a power of ten, up or down. */
  scaleRows(direction: 1 | -1): void {
    const exponent = Math.floor(Math.log10(this.microvoltsPerRow) + 1e-9);
    const lead = Math.round(this.microvoltsPerRow / 10 ** exponent);
    const steps = [1, 2, 5];
    const index = steps.indexOf(lead) + direction + 3;
    const next = steps[index % 3] * 10 ** (exponent + Math.floor(index / 3) - 1);
    this.microvoltsPerRow = Math.min(1e6, Math.max(0.1, next));
    this.isFitting = false;
  }

  /** Takes a height that fits, once for each width of the window, so that scrolling keeps it. */
  fitRows(microvolts: number | null): void {
    const isSettled = this.shown === this.target && this.fittedWidthS === this.target.widthS;
    if (!this.isFitting || microvolts === null || isSettled) return;
    if (this.shown === this.target) this.fittedWidthS = this.target.widthS;
    this.microvoltsPerRow = microvolts;
  }

  /** From now on the rows' height follows what is in view again. */
  followRows(): void {
    this.fittedWidthS = 0;
    this.isFitting = true;
  }

  /** Chooses a row, and brings it into view. */
  choose(row: number): void {
    this.chosen = Math.min(this.rowCount - 1, Math.max(0, row));
    if (this.chosen < this.firstRow) this.firstRow = this.chosen;
    const lastFirst = this.chosen - this.rowsShown + 1;
    if (lastFirst > this.firstRow) this.firstRow = lastFirst;
  }

  showRows(count: number): void {
    this.rowsShown = Math.min(this.rowCount, count);
    this.firstRow = Math.min(this.firstRow, this.rowCount - this.rowsShown);
    this.choose(this.chosen);
  }

  pageRows(direction: 1 | -1): void {
    const last = this.rowCount - this.rowsShown;
    this.firstRow = Math.min(last, Math.max(0, this.firstRow + direction * this.rowsShown));
    this.chosen = Math.min(
      Math.max(this.chosen, this.firstRow),
      this.firstRow + this.rowsShown - 1,
    );
  }

  /** Moves what is drawn towards the target; says whether it is still on its way. */
  advance(elapsedMs: number): boolean {
    if (this.shown === this.target) return false;
    const share = 1 - Math.exp(-elapsedMs / EASE_MS);
    const { startS, widthS } = this.shown;
    const next = {
      startS: startS + (this.target.startS - startS) * share,
      widthS: widthS + (this.target.widthS - widthS) * share,
    };
    const left =
      Math.abs(next.startS - this.target.startS) + Math.abs(next.widthS - this.target.widthS);
    this.shown = left < this.target.widthS / 2000 ? this.target : next;
    return this.shown !== this.target;
  }
}
