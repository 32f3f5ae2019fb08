import * as Comlink from 'comlink';
import {
  axesOf,
  bytesOfBlob,
  calibrate,
  computePairs,
  conclude,
  drawPermutations,
  mergeBlocks,
  phaseBytes,
  screenEpochs,
  writePhases,
  type PairBlock,
  type Plan,
  type RecordingSource,
} from './engine';
import type { EngineWorkerApi, RecordingInput } from './protocol';

/** Entry of the web worker: the engine's functions over Comlink, results handed over uncopied. */
const api: EngineWorkerApi = {
  screen(plan, recordings, epochs) {
    return screenEpochs(plan, axesFor(plan, recordings), sourcesOf(recordings), epochs);
  },

  phases(plan, recordings, epochs, range, shared) {
    const axes = axesFor(plan, recordings);
    return writePhases(plan, axes, sourcesOf(recordings), epochs, range, shared.buffer);
  },

  async draws(plan, { axes, ...counts }, range, shared) {
    drawPermutations(plan, axes, counts, range, shared.buffer);
  },

  async pairs(plan, axes, range, phases, draws, onPair) {
    return handedOver(computePairs(plan, axes, range, phases, draws, onPair));
  },

  async phaseBytes(plan, axes, phases) {
    const bytes = phaseBytes(plan, axes, phases);
    return Comlink.transfer(bytes, [bytes.buffer]);
  },

  async conclude(plan, axes, counts, blocks) {
    const maps = mergeBlocks(blocks, axes, plan.test.permutations);
    const outcome = await conclude(plan, axes, counts, maps);
    // Comlink moves what is listed for the answer itself; a part's own list would be ignored.
    return Comlink.transfer({ maps, outcome }, buffersOf(maps));
  },

  async calibrate(plan, { axes, ...counts }) {
    return calibrate(plan, axes, counts);
  },
};

function axesFor(plan: Plan, recordings: RecordingInput[]) {
  return axesOf(
    plan,
    recordings.map((recording) => recording.facts),
  );
}

function sourcesOf(recordings: RecordingInput[]): RecordingSource[] {
  return recordings.map(({ facts, blob }) => ({ facts, source: bytesOfBlob(blob) }));
}

/** Moves a block's arrays to the page instead of copying them. */
function handedOver(block: PairBlock): PairBlock {
  return Comlink.transfer(block, buffersOf(block));
}

function buffersOf(block: PairBlock): ArrayBuffer[] {
  const buffers = Object.values(block).flatMap((value) =>
    ArrayBuffer.isView(value) && value.buffer instanceof ArrayBuffer ? [value.buffer] : [],
  );
  return [...new Set(buffers)];
}

Comlink.expose(api);
