import { formatCount, formatSeconds } from '$lib/model/format';
import { Rate } from '$lib/run/rate';
import type { RunStage } from '$workers/run/whole-run';

const everyMs = 200;

/** Where the line is written: a terminal. */
export interface LineStream {
  isTTY?: boolean;
  columns?: number;
  write(text: string): unknown;
}

/** One line on a terminal that says how far a run is; silent anywhere else. */
export class ProgressLine {
  readonly #stream: LineStream;
  readonly #shown: boolean;
  readonly #permutations: number;
  #rate = new Rate();
  #stage: RunStage | null = null;
  #written = -Infinity;

  constructor(stream: LineStream, options: { permutations: number; quiet: boolean }) {
    this.#stream = stream;
    this.#shown = stream.isTTY === true && !options.quiet;
    this.#permutations = options.permutations;
  }

  update(stage: RunStage, done: number, of: number, nowMs = performance.now()): void {
    if (!this.#shown) return;
    if (stage !== this.#stage) this.#rate.restart();
    const units = stage === 'pairs' ? this.#permutations : 1;
    this.#rate.add(done * units, nowMs);
    const due = stage !== this.#stage || done === of || nowMs - this.#written >= everyMs;
    this.#stage = stage;
    if (!due) return;
    this.#written = nowMs;
    const text = lineOf(stage, done * units, of * units, this.#rate.perSecond());
    const width = this.#stream.columns ?? 80;
    this.#stream.write(`\r\x1b[2K${text.slice(0, width - 1)}`);
  }

  /** Takes the line away; what is written next begins where it stood. */
  clear(): void {
    if (this.#shown && this.#stage) this.#stream.write('\r\x1b[2K');
  }
}

function lineOf(stage: RunStage, done: number, of: number, perSecond: number | null): string {
  switch (stage) {
    case 'screening':
      return 'reading the epochs';
    case 'concluding':
      return 'drawing the conclusions';
    case 'phases':
    case 'pairs': {
      const what = stage === 'phases' ? 'phases: epoch' : 'null: pair permutations';
      const counts = `${what} ${formatCount(done)} of ${formatCount(of)}`;
      if (perSecond === null || done === of) return counts;
      const rate = formatCount(Math.round(perSecond));
      return `${counts}, ${rate} a second, ${formatSeconds((of - done) / perSecond)} left`;
    }
  }
}
