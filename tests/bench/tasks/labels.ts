import { newKernels } from '../../../workers/kernels';
import { leastFloatFrom, mostFloatTo } from '../../../workers/kernels/group-moments';
import {
  labelLaneTableLength,
  labelOffsetCount,
  labelOffsets,
} from '../../../workers/kernels/label-lanes';
import { groupStates, statePlan } from '../../../workers/engine/null/group-state';
import { order, uniform } from '../random';
import { agree, readF32, write, writeSettings, type Task } from '../task';

const sizes = { features: 2016, epochs: 200, epochsA: 100, permutations: 1000 };
const { features, epochs, epochsA, permutations } = sizes;
const tolerance = 1e-5;

/** 0 or 1 for each epoch and permutation. */
export function labelMatrix(seed: number, count: number): Float32Array {
  const random = uniform(seed);
  const labels = new Float32Array(epochs * count);
  for (let p = 0; p < count; p++) {
    for (const n of order(epochs, random).subarray(0, epochsA)) labels[n * count + p] = 1;
  }
  return labels;
}

function masksOf(labels: Float32Array): Uint8Array {
  const blocks = Math.ceil(epochs / 7);
  const masks = new Uint8Array(blocks * permutations);
  for (let p = 0; p < permutations; p++) {
    for (let n = 0; n < epochs; n++) {
      masks[p * blocks + Math.floor(n / 7)] |= labels[n * permutations + p] << (n % 7);
    }
  }
  return masks;
}

/** Terms `[part][feature][epoch]` of the twin to lanes of one group. */
function lanesOf(terms: Float32Array, group: number, lanes: Float32Array): void {
  for (let n = 0; n < epochs; n++) {
    for (let x = 0; x < 8; x++) {
      const feature = group * 8 + x;
      lanes[n * 16 + x] = terms[feature * epochs + n];
      lanes[n * 16 + 8 + x] = terms[(features + feature) * epochs + n];
    }
  }
}

function load(folder: string) {
  const kernels = newKernels();
  const groups = features / 8;
  const arrays = kernels.arrays({
    ...statePlan(groups),
    terms: ['f32', groups * epochs * 16],
    offsets: ['u16', labelOffsetCount(epochs, permutations)],
    table: ['f32', labelLaneTableLength],
    sums: ['f32', permutations * 16],
    total: ['f32', 16],
    exact: ['f64', 16],
    values: ['f32', permutations * 8],
  });
  const terms = readF32(folder, 'terms.f32');
  const observed = readF32(folder, 'observed.f32');
  const range = { from: 0, to: permutations };
  labelOffsets(masksOf(readF32(folder, 'labels.f32')), arrays.offsets, epochs, range);
  const states = groupStates(arrays, 0, groups);
  const lanes = (group: number) =>
    arrays.terms.subarray(group * epochs * 16, (group + 1) * epochs * 16);
  states.forEach(({ upperFrom, lowerTo }, group) => {
    lanesOf(terms, group, lanes(group));
    for (let x = 0; x < 8; x++) {
      upperFrom[x] = leastFloatFrom(observed[group * 8 + x] - tolerance);
      lowerTo[x] = mostFloatTo(observed[group * 8 + x] + tolerance);
    }
  });
  const shape = { rows: permutations, epochsA, epochsB: epochs - epochsA };
  return () => {
    const { offsets, table, sums, total, exact, values } = arrays;
    for (let group = 0; group < groups; group++) {
      const of = lanes(group);
      kernels.sumLanes(of, exact, { from: 0, to: epochs });
      total.set(exact);
      kernels.sumLabelledLanes(of, offsets, table, sums, {
        epochCount: epochs,
        rows: permutations,
      });
      kernels.resultantDifferences(sums, total, values, shape);
      kernels.addGroupMoments(values, states[group], permutations, true);
    }
    const out = new Float64Array(4 * features);
    states.forEach(({ upper, lower, origin, sum, squares }, group) => {
      for (let x = 0; x < 8; x++) {
        const at = group * 8 + x;
        out[at] = upper[x];
        out[features + at] = lower[x];
        out[2 * features + at] = sum[x] + permutations * origin[x];
        out[3 * features + at] =
          squares[x] + 2 * origin[x] * sum[x] + permutations * origin[x] * origin[x];
      }
    });
    return out;
  };
}

export const labelsTask: Task = {
  id: '(a)',
  twin: 'labels.py',
  name: 'label permutations, f32, fused statistics, N = 200, 1000 permutations',
  unit: 'M pair-permutations/s',
  amount: (features * permutations) / 1e6,
  repeats: 15,
  mustReach: 2.0,
  ambitious: 2.5,
  prepare(folder) {
    const random = uniform(1);
    const terms = new Float32Array(2 * features * epochs);
    for (let i = 0; i < features * epochs; i++) {
      const angle = 2 * Math.PI * random();
      terms[i] = Math.cos(angle);
      terms[features * epochs + i] = Math.sin(angle);
    }
    write(folder, 'terms.f32', terms);
    write(folder, 'labels.f32', labelMatrix(2, permutations));
    write(
      folder,
      'observed.f32',
      Float32Array.from({ length: features }, () => 0.3 * (random() - 0.5)),
    );
    writeSettings(folder, { ...sizes, tolerance });
  },
  load,
  compare(ours, twin) {
    // A value may lie on the edge of the tolerance: one count of a thousand either way.
    agree(ours.subarray(0, 2 * features), twin.subarray(0, 2 * features), 1, 'count');
    agree(ours.subarray(2 * features), twin.subarray(2 * features), 2e-3, 'sum');
  },
};
