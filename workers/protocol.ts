import type { Axes, Epoch, LostEpoch, Outcome, PairBlock, RecordingFacts } from './engine/types';
import type { GatheredBlocks } from './engine/pair-block';
import type { RunCounts } from './engine/digest';
import type { Plan } from './engine/plan';

/**
 * What a run and its engine workers say to each other, over Comlink. The worker keeps no
 * state between calls, so that any worker can do any part, in any order, again.
 */

/** What every worker must know of a recording; how its bytes are reached is the worker's own. */
export interface KnownRecording {
  facts: RecordingFacts;
}

/** A browser's worker reads Blobs, which are handed over without copying. */
export interface RecordingInput extends KnownRecording {
  blob: Blob;
}

/** A thread under Node reads Blobs, or opens the file itself. */
export type ThreadRecording = RecordingInput | (KnownRecording & { path: string });

/** Unit phasors of all kept epochs, shared by all workers; the engine states the layout. */
export interface SharedPhases {
  /** Float32, real and imaginary parts: see workers/engine/phase/layout.ts. */
  buffer: SharedArrayBuffer;
  epochsA: number;
  epochsB: number;
  /** Block of each kept epoch, where the plan's null keeps to blocks. */
  blocks?: number[] | undefined;
}

/** What each permutation shuffles, drawn once a run and shared; the null model states the layout. */
export interface SharedDraws {
  buffer: SharedArrayBuffer;
}

export interface EngineWorkerApi<Recording extends KnownRecording = RecordingInput> {
  /** Reads the samples of these epochs and says which break a limit of the plan. */
  screen(plan: Plan, recordings: Recording[], epochs: Epoch[]): Promise<LostEpoch[]>;
  /**
   * Writes the phases of `epochs[from..to)` into the shared buffer. `epochs` are the kept ones,
   * all of A before all of B.
   */
  phases(
    plan: Plan,
    recordings: Recording[],
    epochs: Epoch[],
    range: { from: number; to: number },
    shared: SharedPhases,
  ): Promise<void>;
  /** Draws permutations `from..to)`. */
  draws(
    plan: Plan,
    counts: RunCounts & { axes: Axes },
    range: { from: number; to: number },
    shared: SharedDraws,
  ): Promise<void>;
  /** All permutations of pairs `from..to)`; `onPair` (a Comlink proxy) hears of each pair done. */
  pairs(
    plan: Plan,
    axes: Axes,
    range: { from: number; to: number },
    phases: SharedPhases,
    draws: SharedDraws,
    onPair: (pairsDone: number) => void,
  ): Promise<PairBlock>;
  /** Phase angles of the kept points as bytes [site][epoch][frequency][time], 256 to the turn. */
  phaseBytes(plan: Plan, axes: Axes, phases: SharedPhases): Promise<Uint8Array>;
  /** Merges what the blocks left for single corrections, and draws the conclusions. */
  conclude(
    plan: Plan,
    axes: Axes,
    counts: { epochsA: number; epochsB: number },
    gathered: GatheredBlocks,
  ): Promise<{ maps: PairBlock; outcome: Outcome }>;
  /**
   * Seconds that one pair under all permutations, and one epoch's phases, cost one worker here for
   * this plan's sizes, measured on a small sample.
   */
  calibrate(
    plan: Plan,
    counts: RunCounts & { axes: Axes },
  ): Promise<{ secondsPerPair: number; secondsPerEpoch: number }>;
}
