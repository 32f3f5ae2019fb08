interface Sample {
  atMs: number;
  done: number;
}

/** Units a second over the last while, so that the time left follows a machine that slows down. */
export class Rate {
  #samples: Sample[] = [];
  readonly #windowMs: number;

  constructor(windowMs = 15_000) {
    this.#windowMs = windowMs;
  }

  add(done: number, atMs: number): void {
    this.#samples.push({ atMs, done });
    while (this.#samples.length > 2 && this.#samples[0]!.atMs < atMs - this.#windowMs) {
      this.#samples.shift();
    }
  }

  /** After a pause: what was measured before says nothing about now. */
  restart(): void {
    this.#samples = [];
  }

  /** Null until two samples stand apart in time. */
  perSecond(): number | null {
    const first = this.#samples[0];
    const last = this.#samples.at(-1);
    if (!first || !last || last.atMs <= first.atMs || last.done <= first.done) return null;
    return ((last.done - first.done) / (last.atMs - first.atMs)) * 1000;
  }
}
