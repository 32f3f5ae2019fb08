import * as Comlink from 'comlink';
import {
  axesOf,
  calibrate,
  computePairs,
  conclude,
  drawPermutations,
  mergeShares,
  phaseBytes,
  screenEpochs,
  writePhases,
  type ByteSource,
  type Plan,
  type RecordingSource,
} from './engine';
import { buffersOf } from './run/buffers';
import type { EngineWorkerApi, KnownRecording } from './protocol';

/**
 * The engine's functions as a worker offers them, results handed over uncopied. `open` reaches a
 * recording's bytes where the worker runs.
 */
export function engineApi<Recording extends KnownRecording>(
  open: (recording: Recording) => ByteSource | Promise<ByteSource>,
): EngineWorkerApi<Recording> {
  const sourcesOf = (recordings: Recording[]): Promise<RecordingSource[]> =>
    Promise.all(
      recordings.map(async (recording) => ({
        facts: recording.facts,
        source: await open(recording),
      })),
    );
  return {
    async screen(plan, recordings, epochs) {
      const axes = axesFor(plan, recordings);
      return screenEpochs(plan, axes, await sourcesOf(recordings), epochs);
    },

    async phases(plan, recordings, epochs, range, shared) {
      const axes = axesFor(plan, recordings);
      await writePhases(plan, axes, await sourcesOf(recordings), epochs, range, shared.buffer);
    },

    async draws(plan, { axes, ...counts }, range, shared) {
      drawPermutations(plan, axes, counts, range, shared.buffer);
    },

    async pairs(plan, axes, range, phases, draws, onPair) {
      const block = computePairs(plan, axes, range, phases, draws, onPair);
      return Comlink.transfer(block, buffersOf(block));
    },

    async phaseBytes(plan, axes, phases) {
      const bytes = phaseBytes(plan, axes, phases);
      return Comlink.transfer(bytes, [bytes.buffer]);
    },

    async conclude(plan, axes, counts, gathered) {
      const maps = mergeShares(gathered, axes, plan.test);
      const outcome = await conclude(plan, axes, counts, maps);
      // Comlink moves what is listed for the answer itself; a part's own list would be ignored.
      return Comlink.transfer({ maps, outcome }, buffersOf(maps));
    },

    async calibrate(plan, { axes, ...counts }) {
      return calibrate(plan, axes, counts);
    },
  };
}

function axesFor(plan: Plan, recordings: KnownRecording[]) {
  return axesOf(
    plan,
    recordings.map((recording) => recording.facts),
  );
}
