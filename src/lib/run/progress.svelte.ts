import type { PairBlock } from '$engine';
import { Rate } from './rate';
import type { Range } from '$workers/run/split';

export interface WorkerLine {
  doing: string;
  pairsDone: number;
  restarts: number;
}

/** How far the pairs are: what the page draws while a run goes on. */
export class PairProgress {
  readonly pairCount: number;
  readonly permutations: number;
  /** Pairs of finished blocks, and of blocks under way. */
  pairsDone = $state(0);
  /** Pair permutations a second over the last while; null until it can be told. */
  rate = $state<number | null>(null);
  workers = $state<WorkerLine[]>([]);
  /** Of each permutation, the maximum over the pairs of finished blocks. */
  maxStatistic = $state.raw<Float32Array | null>(null);
  /** How many pairs stand behind `maxStatistic`. */
  pairsInMaximum = $state(0);

  readonly #rate = new Rate();
  #underWay: Record<number, number> = {};
  /** Words of a worker can arrive after its answer: what is finished is not counted again. */
  #answered: Record<number, true> = {};
  #finished = 0;

  constructor(pairCount: number, permutations: number, workers: number) {
    this.pairCount = pairCount;
    this.permutations = permutations;
    this.workers = Array.from({ length: workers }, () => ({
      doing: 'waiting',
      pairsDone: 0,
      restarts: 0,
    }));
  }

  readonly permutationsDone = $derived.by(() => this.pairsDone * this.permutations);
  readonly permutationsTotal = $derived.by(() => this.pairCount * this.permutations);
  readonly share = $derived.by(() => (this.pairCount ? this.pairsDone / this.pairCount : 0));
  readonly secondsLeft = $derived.by(() =>
    this.rate ? (this.permutationsTotal - this.permutationsDone) / this.rate : null,
  );

  /** `pairsDone` of the block that begins at `range.from`. */
  pair(range: Range, pairsDone: number, worker: number): void {
    if (this.#answered[range.from]) return;
    const line = this.workers[worker];
    if (line) line.pairsDone += Math.max(0, pairsDone - (this.#underWay[range.from] ?? 0));
    this.#underWay[range.from] = pairsDone;
    this.#count();
  }

  /** `worker` is null for a block that was kept from before. */
  block(block: PairBlock, worker: number | null): void {
    const line = worker === null ? undefined : this.workers[worker];
    if (line) line.pairsDone += block.pairCount - (this.#underWay[block.firstPair] ?? 0);
    this.#underWay[block.firstPair] = 0;
    this.#answered[block.firstPair] = true;
    this.#finished += block.pairCount;
    const maxima = this.maxStatistic ?? new Float32Array(this.permutations).fill(-Infinity);
    this.maxStatistic = maxima.map((value, p) => Math.max(value, block.maxStatistic[p]!));
    this.pairsInMaximum += block.pairCount;
    this.#count();
  }

  /** Blocks taken up from a checkpoint count as done, but say nothing about the rate. */
  restore(blocks: PairBlock[]): void {
    for (const block of blocks) this.block(block, null);
    this.#rate.restart();
    this.rate = null;
  }

  restartRate(): void {
    this.#rate.restart();
    this.rate = null;
  }

  #count(): void {
    const underWay = Object.values(this.#underWay).reduce((sum, pairs) => sum + pairs, 0);
    this.pairsDone = this.#finished + underWay;
    this.#rate.add(this.permutationsDone, performance.now());
    this.rate = this.#rate.perSecond() ?? this.rate;
  }
}
