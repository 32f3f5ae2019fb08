import { axesOf, planEpochs, type Consequences, type LostEpoch, type Plan } from '$engine';
import type { StudyRecording } from '$lib/model/study-recording';
import { createEngineWorker } from '$lib/run/engine-worker';
import { asRunError, RunError } from '$lib/run/errors';
import { poolSize, WorkerPool } from '$workers/run/pool';
import { fetchRecording, isKept } from '$lib/run/recording-cache';
import { screen } from '$workers/run/steps';
import { countKey, timeKey } from './count-key';

const quietMs = 900;

interface Count {
  key: string;
  lost: LostEpoch[];
}

/**
 * What only this machine can say of a plan: which epochs its samples leave out, and how long a run
 * would take. The work is done by engine workers, which are opened when first needed.
 */
export class Machine {
  count = $state.raw<Count | null>(null);
  /** Share of the recordings' bytes that are here, or null while no count is under way. */
  progress = $state<number | null>(null);
  doing = $state('');
  failure = $state('');
  seconds = $state<number | null>(null);
  workers = $state(0);
  #pool: WorkerPool | null = null;
  #countTimer: ReturnType<typeof setTimeout> | undefined;
  #timeTimer: ReturnType<typeof setTimeout> | undefined;
  #timedKey = '';
  #countingKey = '';
  #closed = false;

  /** The count, if it is one of this plan. */
  lostOf(plan: Plan | null): LostEpoch[] | null {
    if (!plan) return null;
    const { aboveUv, flatBelowUv } = plan.epoch.reject;
    if (aboveUv === null && flatBelowUv === null) return [];
    return this.count?.key === countKey(plan) ? this.count.lost : null;
  }

  /** To be called when the plan changes: counts again where no download is needed for it. */
  follow(plan: Plan, recordings: readonly StudyRecording[], facts: Consequences): void {
    clearTimeout(this.#countTimer);
    clearTimeout(this.#timeTimer);
    if (this.lostOf(plan) === null) {
      this.#countTimer = setTimeout(() => void this.#countIfKept(plan, recordings), quietMs);
    }
    const key = timeKey(plan, facts.epochs, facts.pairs);
    if (key === this.#timedKey || facts.epochs.a < 2 || facts.epochs.b < 2) return;
    this.#timeTimer = setTimeout(() => void this.#time(key, plan, recordings, facts), quietMs);
  }

  async countNow(plan: Plan, recordings: readonly StudyRecording[]): Promise<void> {
    const key = countKey(plan);
    if (this.#closed || this.#countingKey === key) return;
    this.#countingKey = key;
    this.failure = '';
    this.progress = 0;
    try {
      const lost = await this.#screen(plan, used(plan, recordings));
      if (this.#countingKey === key) this.count = { key, lost };
    } catch (error) {
      if (this.#countingKey === key) this.failure = asRunError(error).message;
      this.#forgetPool();
    } finally {
      if (this.#countingKey === key) {
        this.#countingKey = '';
        this.progress = null;
      }
    }
  }

  close(): void {
    this.#closed = true;
    clearTimeout(this.#countTimer);
    clearTimeout(this.#timeTimer);
    this.#countingKey = '';
    this.#forgetPool();
  }

  /** A pool whose workers broke answers nothing any more; the next work opens a new one. */
  #forgetPool(): void {
    this.#pool?.end();
    this.#pool = null;
  }

  #open(): WorkerPool {
    if (this.#closed) throw new RunError('cancelled', 'The page was left.');
    const size = poolSize(null, navigator.hardwareConcurrency);
    this.#pool ??= new WorkerPool({ size, createWorker: createEngineWorker });
    this.workers = size;
    return this.#pool;
  }

  async #countIfKept(plan: Plan, recordings: readonly StudyRecording[]): Promise<void> {
    const kept = await Promise.all(used(plan, recordings).map((each) => isKept(each)));
    if (kept.every(Boolean)) await this.countNow(plan, recordings);
  }

  async #screen(plan: Plan, recordings: StudyRecording[]): Promise<LostEpoch[]> {
    const total = recordings.reduce((sum, each) => sum + each.sizeBytes, 0);
    let before = 0;
    const inputs = [];
    for (const facts of recordings) {
      this.doing = `reading ${facts.name}`;
      const onProgress = ({ doneBytes }: { doneBytes: number }) => {
        this.progress = total === 0 ? 0 : (before + doneBytes) / total;
      };
      inputs.push({ facts, blob: await fetchRecording(facts, { onProgress }) });
      before += facts.sizeBytes;
    }
    const { epochs } = planEpochs(plan, recordings);
    const axes = axesOf(plan, recordings);
    this.doing = 'looking at the samples of each epoch';
    const onWorker = () => undefined;
    return screen({ pool: this.#open(), plan, axes, recordings: inputs, onWorker }, epochs);
  }

  async #time(
    key: string,
    plan: Plan,
    recordings: readonly StudyRecording[],
    facts: Consequences,
  ): Promise<void> {
    this.#timedKey = key;
    const { a, b } = facts.epochs;
    try {
      const pool = this.#open();
      const axes = axesOf(plan, [...recordings]);
      const cost = await pool.run((api) => api.calibrate(plan, { epochsA: a, epochsB: b, axes }));
      if (this.#timedKey !== key) return;
      const work = cost.secondsPerPair * facts.pairs + cost.secondsPerEpoch * (a + b);
      this.seconds = work / Math.min(pool.size, Math.max(1, facts.pairs));
    } catch {
      // A time that cannot be measured is not shown; the run itself will say what is wrong.
      if (this.#timedKey !== key) return;
      this.seconds = null;
      this.#timedKey = '';
    }
  }
}

function used(plan: Plan, recordings: readonly StudyRecording[]): StudyRecording[] {
  return recordings.filter((each) => plan.recordings.some(({ sha256 }) => sha256 === each.sha256));
}
