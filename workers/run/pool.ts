import type { EngineWorkerApi, KnownRecording, RecordingInput } from '../protocol';
import { PoolError } from './pool-error';

/** One part of the work. It may be called again on another worker when the first one breaks. */
export type Task<T, Recording extends KnownRecording = RecordingInput> = (
  api: EngineWorkerApi<Recording>,
  worker: number,
) => Promise<T>;

/** What the steps of a run ask of a pool. */
export interface TaskPool<Recording extends KnownRecording = RecordingInput> {
  readonly size: number;
  run<T>(task: Task<T, Recording>): Promise<T>;
}

/** A worker of any kind: a browser's, or a thread under Node. */
export interface OpenWorker<Recording extends KnownRecording = RecordingInput> {
  api: EngineWorkerApi<Recording>;
  terminate(): void;
}

export interface PoolOptions<Recording extends KnownRecording = RecordingInput> {
  size: number;
  /** `onBroken` is told, with the reason in words, when the worker can no longer answer. */
  createWorker: (onBroken: (reason: string) => void) => OpenWorker<Recording>;
  /** Over the pool's life; the next crash fails the run. */
  maxRestarts?: number;
  onRestart?: (worker: number, reason: string) => void;
  /** The worker has answered, and nothing waits for it. */
  onIdle?: (worker: number) => void;
}

/** Each worker holds about 100 MB of tables; more than this gains little and costs memory. */
const workerCap = 16;

/** As many workers as the machine has cores, or as many as asked for, between 1 and the cap. */
export function poolSize(asked: number | null, cores: number): number {
  const wanted = asked !== null && Number.isInteger(asked) && asked >= 1 ? asked : cores;
  return Math.max(1, Math.min(workerCap, wanted || 1));
}

interface Job<Recording extends KnownRecording> {
  task: Task<unknown, Recording>;
  resolve: (value: unknown) => void;
  reject: (reason: unknown) => void;
}

interface Seat<Recording extends KnownRecording> {
  worker: OpenWorker<Recording>;
  job: Job<Recording> | null;
}

/**
 * Engine workers and the queue before them. The workers keep no state, so a part whose worker
 * broke is simply done again by a fresh one.
 */
export class WorkerPool<
  Recording extends KnownRecording = RecordingInput,
> implements TaskPool<Recording> {
  readonly size: number;
  readonly #options: PoolOptions<Recording>;
  readonly #seats: Seat<Recording>[];
  readonly #queue: Job<Recording>[] = [];
  #restarts = 0;
  #paused = false;
  #ended: PoolError | null = null;

  constructor(options: PoolOptions<Recording>) {
    this.size = options.size;
    this.#options = options;
    this.#seats = Array.from({ length: options.size }, (_, index) => this.#open(index));
  }

  /** Queues one part. Rejects with the engine's own error, or a PoolError when the pool ends. */
  run<T>(task: Task<T, Recording>): Promise<T> {
    return new Promise<T>((resolve, reject) => {
      if (this.#ended) return reject(this.#ended);
      this.#queue.push({ task, resolve: resolve as Job<Recording>['resolve'], reject });
      this.#dispatch();
    });
  }

  /** Parts under way are finished, no new one begins. */
  pause(): void {
    this.#paused = true;
  }

  resume(): void {
    this.#paused = false;
    this.#dispatch();
  }

  /** Ends every worker at once; whatever was queued or under way rejects with `reason`. */
  end(reason = new PoolError('cancelled', 'The run was stopped.')): void {
    if (this.#ended) return;
    this.#ended = reason;
    for (const seat of this.#seats) {
      seat.worker.terminate();
      seat.job?.reject(reason);
      seat.job = null;
    }
    for (const job of this.#queue.splice(0)) job.reject(reason);
  }

  #open(index: number): Seat<Recording> {
    const worker = this.#options.createWorker((reason) => this.#restart(index, worker, reason));
    return { worker, job: null };
  }

  #restart(index: number, broken: OpenWorker<Recording>, reason: string): void {
    const seat = this.#seats[index];
    if (this.#ended || seat?.worker !== broken) return;
    broken.terminate();
    if (++this.#restarts > (this.#options.maxRestarts ?? 3)) {
      const message = `Workers broke ${this.#restarts} times, the last time because ${reason}.`;
      return this.end(new PoolError('worker-crashed', message));
    }
    this.#options.onRestart?.(index, reason);
    this.#seats[index] = this.#open(index);
    if (seat.job) this.#queue.unshift(seat.job);
    this.#dispatch();
  }

  #dispatch(): void {
    if (this.#paused || this.#ended) return;
    this.#seats.forEach((seat, index) => {
      if (seat.job) return;
      const job = this.#queue.shift();
      if (job) void this.#work(seat, index, job);
    });
  }

  async #work(seat: Seat<Recording>, index: number, job: Job<Recording>): Promise<void> {
    seat.job = job;
    try {
      const value = await job.task(seat.worker.api, index);
      // A seat that was restarted meanwhile has handed its job on.
      if (seat.job === job && this.#seats[index] === seat) job.resolve(value);
    } catch (thrown) {
      if (this.#seats[index] === seat) job.reject(thrown);
    } finally {
      seat.job = null;
      this.#dispatch();
      if (!seat.job && !this.#ended) this.#options.onIdle?.(index);
    }
  }
}
