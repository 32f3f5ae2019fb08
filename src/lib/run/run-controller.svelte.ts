import { transfer } from 'comlink';
import { axesOf, BlockGatherer, engineVersion, partLists, planEpochs, withoutLost } from '$engine';
import type {
  Axes,
  Epoch,
  GatheredBlocks,
  LostEpoch,
  PairBlock,
  Plan,
  RecordingFacts,
} from '$engine';
import type { RunChange, RunSummary, Timings } from '$lib/model/run';
import type { RecordingInput, SharedPhases } from '$workers/protocol';
import { Checkpoints, type RunIdentity } from './checkpoints';
import { createEngineWorker } from './engine-worker';
import { tallyOf, type EpochTally } from './epoch-tally';
import { asRunError, isFinal, RunError } from './errors';
import { isolationTrouble } from './isolation';
import { buffersOf } from '$workers/run/buffers';
import { WorkerPool } from '$workers/run/pool';
import { PairProgress } from './progress.svelte';
import { fetchRecording, type FetchProgress, type RecordingRef } from './recording-cache';
import { changeRun, createRun } from './run-api';
import { holdRunLock } from './run-lock';
import { rangesLeft } from '$workers/run/split';
import { draws, pairBlocks, phases, screen, type StepContext } from '$workers/run/steps';
import { upload } from './upload';

export type RunStatus = 'idle' | 'running' | 'paused' | 'stopped' | 'failed' | 'finished';
export type RunStep =
  'fetching' | 'screening' | 'phases' | 'permuting' | 'concluding' | 'uploading';

export interface RunTask {
  contrastId: string;
  plan: Plan;
  planHash: string;
  facts: RecordingFacts[];
  /** Where each recording of the plan is fetched from. */
  files: RecordingRef[];
}

/** The server hears of progress at most this often. */
const reportEveryMs = 3000;

/**
 * One run in this page, from fetching the recordings to the stored result. The page reads its
 * state; the heavy work is the workers'. A run goes on from its checkpoint after a reload.
 */
export class RunController {
  status = $state<RunStatus>('idle');
  step = $state<RunStep>('fetching');
  runId = $state<string | null>(null);
  failure = $state.raw<RunError | null>(null);
  /** Why a reload would begin anew, in words; null while checkpoints are kept. */
  checkpointTrouble = $state<string | null>(null);
  fetched = $state<Record<string, FetchProgress>>({});
  epochs = $state.raw<EpochTally | null>(null);
  phasesDone = $state(0);
  pairs = $state.raw<PairProgress | null>(null);
  sent = $state({ bytes: 0, total: 0 });
  workerCount = $state(1);
  /** Grows with each state that the server was told: what it says of the run is new then. */
  reported = $state(0);

  readonly task: RunTask;
  #pool: WorkerPool | null = null;
  #abort = new AbortController();
  #checkpoints: Checkpoints | null = null;
  #lastReport = 0;
  #goOn: (() => void) | null = null;
  #timings: Timings = { fetchS: 0, screenS: 0, phasesS: 0, pairsS: 0, concludeS: 0 };

  constructor(task: RunTask, workerCount: number) {
    this.task = task;
    this.workerCount = workerCount;
  }

  /** Share of the pairs done: the one number for the server, the title and other tabs. */
  get share(): number {
    return this.pairs?.share ?? 0;
  }

  /** Begins a run of the plan anew. */
  async start(): Promise<void> {
    await this.#guarded(async () => {
      this.runId = await createRun(this.task.contrastId, {
        planHash: this.task.planHash,
        engineVersion,
        workerCount: this.workerCount,
      });
      await this.#work(this.runId);
    });
  }

  /** Takes up a run that was begun before, from its checkpoint where this browser has one. */
  async takeUp(runId: string, paused: boolean): Promise<void> {
    this.runId = runId;
    await this.#guarded(async () => {
      if (paused) this.status = 'paused';
      else await changeRun(runId, { state: 'running', workerCount: this.workerCount });
      await this.#work(runId);
    });
  }

  /** After a failure: the same run again, from what was kept. */
  async again(): Promise<void> {
    if (this.runId) await this.takeUp(this.runId, false);
    else await this.start();
  }

  pause(): void {
    if (this.status !== 'running') return;
    this.status = 'paused';
    this.#pool?.pause();
    void this.#report({ state: 'paused', progress: this.share });
  }

  goOn(): void {
    if (this.status !== 'paused') return;
    this.status = 'running';
    this.pairs?.restartRate();
    this.#pool?.resume();
    this.#goOn?.();
    void this.#report({ state: 'running', progress: this.share });
  }

  /** Ends the run for good and forgets its checkpoint. */
  async stop(): Promise<void> {
    const { runId } = this;
    this.status = 'stopped';
    this.#end();
    if (!runId) return;
    await this.#checkpoints?.remove(runId);
    await changeRun(runId, { state: 'stopped' }).catch(() => undefined);
  }

  /** The page goes away: workers end, the checkpoint stays. */
  leave(): void {
    if (this.status === 'running' || this.status === 'paused') this.#end();
    this.#checkpoints?.close();
  }

  #end(): void {
    this.#abort.abort();
    this.#pool?.end();
    this.#pool = null;
    this.#goOn?.();
  }

  /** Runs `work` under this plan's lock, and turns whatever it throws into a state with words. */
  async #guarded(work: () => Promise<void>): Promise<void> {
    this.status = 'running';
    this.failure = null;
    this.#abort = new AbortController();
    try {
      const trouble = isolationTrouble();
      if (trouble) throw new RunError('not-isolated', trouble);
      await holdRunLock(this.task.planHash, work);
    } catch (thrown) {
      await this.#fail(asRunError(thrown));
    } finally {
      this.#pool?.end();
      this.#pool = null;
    }
  }

  async #fail(error: RunError): Promise<void> {
    if (error.code === 'cancelled' || this.#abort.signal.aborted) return;
    this.failure = error;
    this.status = 'failed';
    if (error.code === 'elsewhere' || !this.runId) return;
    // Computing the same again from what is kept would only fail the same way.
    if (isFinal(error.code)) await this.#checkpoints?.remove(this.runId);
    // A refused result was marked by the server already; saying it again changes nothing.
    if (error.code === 'refused') return;
    await this.#report({ state: 'failed', failure: error.message, progress: this.share });
  }

  async #work(runId: string): Promise<void> {
    const { task } = this;
    const identity: RunIdentity = { runId, planHash: task.planHash, engineVersion };
    this.#checkpoints ??= await Checkpoints.open((trouble) => (this.checkpointTrouble = trouble));
    const kept = await this.#checkpoints.find(identity);
    if (!kept) await this.#checkpoints.begin(identity);

    const axes = axesOf(task.plan, task.facts);
    this.pairs = new PairProgress(axes.pairs.length, task.plan.test.permutations, this.workerCount);
    this.pairs.restore(kept?.blocks ?? []);
    const recordings = await this.#timed('fetchS', () => this.#fetch());
    await this.#gate();
    const context = this.#openPool(axes, recordings);
    const epochs = await this.#timed('screenS', () =>
      this.#screen(context, identity, kept?.screened ?? null),
    );
    const shared = await this.#timed('phasesS', () => this.#phases(context, epochs));
    const gathered = await this.#timed('pairsS', () =>
      this.#permute(context, identity, shared, kept?.blocks ?? []),
    );
    await this.#finish(context, identity, shared, gathered);
  }

  #openPool(axes: Axes, recordings: RecordingInput[]): StepContext {
    const onWorker = (worker: number, doing: string): void => {
      const line = this.pairs?.workers[worker];
      if (line) line.doing = doing;
    };
    const pool = new WorkerPool({
      size: this.workerCount,
      createWorker: createEngineWorker,
      onIdle: (worker) => onWorker(worker, 'waiting'),
      onRestart: (worker) => {
        const line = this.pairs?.workers[worker];
        if (line) line.restarts += 1;
      },
    });
    if (this.status === 'paused') pool.pause();
    this.#pool = pool;
    return { pool, plan: this.task.plan, axes, recordings, onWorker };
  }

  async #fetch(): Promise<RecordingInput[]> {
    this.step = 'fetching';
    const inputs: RecordingInput[] = [];
    for (const facts of this.task.facts) {
      const file = this.task.files.find(({ sha256 }) => sha256 === facts.sha256);
      if (!file) {
        const message = `${facts.name} is no longer in the study. Upload it again.`;
        throw new RunError('recording-missing', message);
      }
      const onProgress = (progress: FetchProgress): void => {
        this.fetched[file.sha256] = progress;
      };
      const blob = await fetchRecording(file, { onProgress, signal: this.#abort.signal });
      onProgress({ step: 'verifying', doneBytes: file.sizeBytes, totalBytes: file.sizeBytes });
      inputs.push({ facts, blob });
    }
    return inputs;
  }

  async #screen(
    context: StepContext,
    identity: RunIdentity,
    known: LostEpoch[] | null,
  ): Promise<Epoch[]> {
    this.step = 'screening';
    const { epochs: planned, lost } = planEpochs(this.task.plan, this.task.facts);
    const screened = known ?? (await screen(context, planned));
    if (!known) await this.#checkpoints?.saveScreening(identity, screened);
    const kept = withoutLost(planned, screened);
    this.epochs = tallyOf(kept, [...lost, ...screened]);
    for (const [name, left] of Object.entries({ A: this.epochs.keptA, B: this.epochs.keptB })) {
      if (left >= 2) continue;
      throw new RunError(
        'no-epochs',
        `Condition ${name} has ${left} epochs left; two are the least. Loosen the limits or widen the rules in a new version of the plan.`,
      );
    }
    return kept;
  }

  #phases(context: StepContext, epochs: Epoch[]): Promise<SharedPhases> {
    this.step = 'phases';
    this.phasesDone = 0;
    return phases(context, epochs, (count) => (this.phasesDone += count));
  }

  async #permute(
    context: StepContext,
    identity: RunIdentity,
    shared: SharedPhases,
    done: PairBlock[],
  ): Promise<GatheredBlocks> {
    this.step = 'permuting';
    const drawn = await draws(context, shared);
    const gatherer = new BlockGatherer(context.axes, context.plan.test);
    for (const block of done) gatherer.add(block);
    const left = rangesLeft(
      context.axes.pairs.length,
      done.map(({ firstPair, pairCount }) => ({ from: firstPair, to: firstPair + pairCount })),
    );
    await pairBlocks(
      context,
      left,
      { phases: shared, draws: drawn },
      {
        pair: (range, pairsDone, worker) => this.pairs?.pair(range, pairsDone, worker),
        block: (block, worker) => {
          gatherer.add(block);
          this.pairs?.block(block, worker);
          void this.#checkpoints?.saveBlock(identity.runId, block);
          this.#reportProgress();
        },
      },
    );
    return gatherer.finish();
  }

  async #finish(
    { pool, plan, axes }: StepContext,
    { runId }: RunIdentity,
    shared: SharedPhases,
    gathered: GatheredBlocks,
  ): Promise<void> {
    const epochs = this.epochs as EpochTally;
    this.step = 'concluding';
    const counts = { epochsA: shared.epochsA, epochsB: shared.epochsB };
    const { maps, outcome } = await this.#timed('concludeS', () =>
      pool.run((api) =>
        api.conclude(plan, axes, counts, transfer(gathered, buffersOf(gathered.maps))),
      ),
    );
    const angles = await pool.run((api) => api.phaseBytes(plan, axes, shared));
    await this.#gate();
    this.step = 'uploading';
    const summary: RunSummary = {
      planHash: this.task.planHash,
      engineVersion,
      digest: outcome.digest,
      workerCount: this.workerCount,
      keptA: epochs.keptA,
      keptB: epochs.keptB,
      lost: epochs.lost,
      maxStatistic: Array.from(maps.maxStatistic),
      clusterMass: Array.from(maps.maxClusterMass),
      parts: partLists(maps),
      timings: this.#timings,
    };
    await upload(runId, axes, { maps, phases: angles }, summary, (bytes, total) => {
      this.sent = { bytes, total };
    });
    await this.#checkpoints?.remove(runId);
    this.status = 'finished';
  }

  /** Waits here while the run is paused; between steps that the pool does not hold back. */
  async #gate(): Promise<void> {
    if (this.status === 'paused') await new Promise<void>((go) => (this.#goOn = go));
    this.#goOn = null;
    if (this.#abort.signal.aborted) throw new RunError('cancelled', 'The run was stopped.');
  }

  async #timed<T>(step: keyof Timings, work: () => Promise<T>): Promise<T> {
    const begun = performance.now();
    const result = await work();
    this.#timings = { ...this.#timings, [step]: (performance.now() - begun) / 1000 };
    return result;
  }

  #reportProgress(): void {
    if (performance.now() - this.#lastReport < reportEveryMs) return;
    void this.#report({ progress: this.share });
  }

  /** Told in passing: a report that is lost costs nothing, the next one says it again. */
  async #report(change: RunChange): Promise<void> {
    this.#lastReport = performance.now();
    if (!this.runId) return;
    await changeRun(this.runId, change).catch(() => undefined);
    if (change.state) this.reported += 1;
  }
}
