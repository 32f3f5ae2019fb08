import { compiledKernels as base64 } from './compiled';
import type { KernelExports } from './exports';
import { arrayBytes, layArrays, type Kernels } from './kernels';

const pageBytes = 65_536;
/** Room to begin at the next multiple of an array's alignment. */
const slack = 16;

let module: WebAssembly.Module | null = null;

/** Compiled once a thread. @throws CompileError where SIMD or WebAssembly is missing or forbidden. */
function compiledModule(): WebAssembly.Module {
  module ??= new WebAssembly.Module(Uint8Array.from(atob(base64), (c) => c.charCodeAt(0)));
  return module;
}

/** The kernels in WebAssembly with SIMD, in a memory of their own, which grows as it is asked to. */
export function newCompiledKernels(): Kernels {
  const wasm = new WebAssembly.Instance(compiledModule()).exports as KernelExports;
  const heap = wasm.heapBase();
  return {
    kind: 'compiled',
    arrays(plan) {
      // Growing detaches views, so it comes before any is made.
      const missing = heap + slack + arrayBytes(plan) - wasm.memory.buffer.byteLength;
      if (missing > 0) wasm.memory.grow(Math.ceil(missing / pageBytes));
      return layArrays(plan, wasm.memory.buffer, heap);
    },
    ...groupKernels(wasm),
    ...nullKernels(wasm),
  };
}

function groupKernels(wasm: KernelExports) {
  return {
    crossLanes: (j, k, terms, { epochCount, samplesPerEpoch, first, count }) =>
      wasm.crossLanes(
        j.byteOffset,
        k.byteOffset,
        terms.byteOffset,
        epochCount,
        samplesPerEpoch,
        first,
        count,
      ),
    siteLanes: (phasors, lanes, { epochCount, samplesPerEpoch, first, count }) =>
      wasm.siteLanes(
        phasors.byteOffset,
        lanes.byteOffset,
        epochCount,
        samplesPerEpoch,
        first,
        count,
      ),
    sumLanes: (terms, sums, { from, to }) =>
      wasm.sumLanes(terms.byteOffset, sums.byteOffset, from, to),
    sumLabelledLanes: (terms, offsets, table, sums, { epochCount, rows }) =>
      wasm.sumLabelledLanes(
        terms.byteOffset,
        offsets.byteOffset,
        table.byteOffset,
        sums.byteOffset,
        epochCount,
        rows,
      ),
    sumShuffledLanes: (j, k, order, sums, { rows, epochCount }) =>
      wasm.sumShuffledLanes(
        j.byteOffset,
        k.byteOffset,
        order.byteOffset,
        sums.byteOffset,
        rows,
        epochCount,
      ),
    resultantDifferences: (sums, total, values, { rows, epochsA, epochsB }) =>
      wasm.resultantDifferences(
        sums.byteOffset,
        total.byteOffset,
        values.byteOffset,
        rows,
        1 / epochsA,
        1 / epochsB,
      ),
    resultantsOfLanes: (sums, values, { rows, epochs }) =>
      wasm.resultantsOfLanes(sums.byteOffset, values.byteOffset, rows, 1 / epochs),
  } satisfies Partial<Kernels>;
}

function nullKernels(wasm: KernelExports) {
  return {
    standardisedDifferences: (a, b, scaleA, scaleB, rows) =>
      wasm.standardisedDifferences(
        a.byteOffset,
        b.byteOffset,
        scaleA.mean.byteOffset,
        scaleA.inverse.byteOffset,
        scaleB.mean.byteOffset,
        scaleB.inverse.byteOffset,
        rows,
      ),
    addGroupMoments: (values, sums, rows, start) =>
      wasm.addGroupMoments(
        values.byteOffset,
        sums.origin.byteOffset,
        sums.sum.byteOffset,
        sums.squares.byteOffset,
        sums.upperFrom.byteOffset,
        sums.lowerTo.byteOffset,
        sums.upper.byteOffset,
        sums.lower.byteOffset,
        rows,
        Number(start),
      ),
    standardiseGroup: (values, scale, z, rows) =>
      wasm.standardiseGroup(
        values.byteOffset,
        scale.center.byteOffset,
        scale.inverse.byteOffset,
        scale.rest.byteOffset,
        z.byteOffset,
        rows,
      ),
    addGroupMaps: (values, scale, out, histogram, { rows, features, shape }) =>
      wasm.addGroupMaps(
        values.byteOffset,
        scale.center.byteOffset,
        scale.inverse.byteOffset,
        scale.rest.byteOffset,
        out.beyond.byteOffset,
        out.counts.byteOffset,
        out.positive.byteOffset,
        out.negative.byteOffset,
        out.best.byteOffset,
        histogram.byteOffset,
        rows,
        shape.stride,
        shape.bitStride,
        features,
        shape.clusterFormingZ,
        shape.tailSign,
        shape.binCount,
        shape.binsPerUnit,
        shape.binOffset,
        Number(shape.permutations > 65_535),
      ),
    addClusterMasses: (rows, masses, scratch, map) =>
      wasm.addClusterMasses(
        rows.beyond.byteOffset,
        rows.positive.byteOffset,
        rows.negative.byteOffset,
        masses.byteOffset,
        scratch.byteOffset,
        map.rows,
        map.frequencyCount,
        map.timeCount,
        map.shape.stride,
        map.shape.bitStride,
        map.shape.tailSign,
      ),
  } satisfies Partial<Kernels>;
}
