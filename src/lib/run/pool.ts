import { wrap, type Remote } from 'comlink';
import type { EngineWorkerApi } from '$workers/protocol';
import { asRunError, RunError } from './errors';

export type EngineApi = Remote<EngineWorkerApi>;
/** One part of the work. It may be called again on another worker when the first one breaks. */
export type Task<T> = (api: EngineApi, worker: number) => Promise<T>;

export interface PoolOptions {
  size: number;
  createWorker: () => Worker;
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

interface Job {
  task: Task<unknown>;
  resolve: (value: unknown) => void;
  reject: (reason: RunError) => void;
}

interface Seat {
  worker: Worker;
  api: EngineApi;
  job: Job | null;
}

/**
 * Engine workers and the queue before them. The workers keep no state, so a part whose worker
 * broke is simply done again by a fresh one.
 */
export class WorkerPool {
  readonly size: number;
  readonly #options: PoolOptions;
  readonly #seats: Seat[];
  readonly #queue: Job[] = [];
  #restarts = 0;
  #paused = false;
  #ended: RunError | null = null;

  constructor(options: PoolOptions) {
    this.size = options.size;
    this.#options = options;
    this.#seats = Array.from({ length: options.size }, (_, index) => this.#open(index));
  }

  /** Queues one part. Rejects with a RunError when the engine refuses it or the pool ends. */
  run<T>(task: Task<T>): Promise<T> {
    return new Promise<T>((resolve, reject) => {
      if (this.#ended) return reject(this.#ended);
      this.#queue.push({ task, resolve: resolve as Job['resolve'], reject });
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
  end(reason = new RunError('cancelled', 'The run was stopped.')): void {
    if (this.#ended) return;
    this.#ended = reason;
    for (const seat of this.#seats) {
      seat.worker.terminate();
      seat.job?.reject(reason);
      seat.job = null;
    }
    for (const job of this.#queue.splice(0)) job.reject(reason);
  }

  #open(index: number): Seat {
    const worker = this.#options.createWorker();
    const crashed = (reason: string): void => this.#restart(index, worker, reason);
    worker.addEventListener('error', (event) => crashed(event.message || 'it could not be loaded'));
    worker.addEventListener('messageerror', () => crashed('its answer could not be read'));
    return { worker, api: wrap<EngineWorkerApi>(worker), job: null };
  }

  #restart(index: number, broken: Worker, reason: string): void {
    const seat = this.#seats[index];
    if (this.#ended || seat?.worker !== broken) return;
    broken.terminate();
    if (++this.#restarts > (this.#options.maxRestarts ?? 3)) {
      const message = `Workers broke ${this.#restarts} times, the last time because ${reason}.`;
      return this.end(new RunError('worker-crashed', message));
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

  async #work(seat: Seat, index: number, job: Job): Promise<void> {
    seat.job = job;
    try {
      const value = await job.task(seat.api, index);
      // A seat that was restarted meanwhile has handed its job on.
      if (seat.job === job && this.#seats[index] === seat) job.resolve(value);
    } catch (thrown) {
      if (this.#seats[index] === seat) job.reject(asRunError(thrown));
    } finally {
      seat.job = null;
      this.#dispatch();
      if (!seat.job && !this.#ended) this.#options.onIdle?.(index);
    }
  }
}
