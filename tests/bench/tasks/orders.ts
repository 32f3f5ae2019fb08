import { newKernels } from '../../../workers/kernels';
import { groupStates, statePlan } from '../../../workers/engine/null/group-state';
import { order, uniform } from '../random';
import { agree, readF32, readU16, write, writeSettings, type Task } from '../task';

const sizes = { features: 120, sites: 64, epochs: 200, permutations: 20 };
const groups = sizes.features / 8;
const { features, sites, epochs, permutations } = sizes;
const pairs = (sites * (sites - 1)) / 2;

function load(folder: string) {
  const kernels = newKernels();
  const arrays = kernels.arrays({
    ...statePlan(groups),
    lanes: ['f32', groups * sites * epochs * 16],
    partners: ['u16', permutations * epochs],
    sums: ['f32', permutations * 16],
    values: ['f32', permutations * 8],
  });
  const phasors = readF32(folder, 'phasors.c64');
  const orders = readU16(folder, 'orders.u16');
  const states = groupStates(arrays, 0, groups);
  const row = (site: number, group: number) => (group * sites + site) * epochs * 16;
  for (let site = 0; site < sites; site++) {
    for (let n = 0; n < epochs; n++) {
      for (let x = 0; x < features; x++) {
        const from = 2 * ((x * sites + site) * epochs + n);
        const at = row(site, x >> 3) + n * 16 + (x & 7);
        arrays.lanes[at] = phasors[from];
        arrays.lanes[at + 8] = phasors[from + 1];
      }
    }
  }
  const lanes = (site: number, group: number) => arrays.lanes.subarray(row(site, group));
  const out = new Float64Array(2 * pairs * features);

  function arrange(j: number, k: number): void {
    for (let p = 0; p < permutations; p++) {
      const ofJ = (p * sites + j) * epochs;
      const ofK = (p * sites + k) * epochs;
      for (let n = 0; n < epochs; n++) {
        arrays.partners[p * epochs + orders[ofJ + n]] = orders[ofK + n];
      }
    }
  }

  function store(pair: number, group: number): void {
    const { origin, sum, squares } = states[group];
    for (let x = 0; x < 8; x++) {
      const at = pair * features + group * 8 + x;
      out[at] = sum[x] + permutations * origin[x];
      out[pairs * features + at] =
        squares[x] + 2 * origin[x] * sum[x] + permutations * origin[x] * origin[x];
    }
  }

  const shape = { rows: permutations, epochCount: epochs };
  return () => {
    let pair = 0;
    for (let j = 0; j < sites; j++) {
      for (let k = j + 1; k < sites; k++, pair++) {
        arrange(j, k);
        for (let group = 0; group < groups; group++) {
          const [ofJ, ofK] = [lanes(j, group), lanes(k, group)];
          kernels.sumShuffledLanes(ofJ, ofK, arrays.partners, arrays.sums, shape);
          kernels.resultantsOfLanes(arrays.sums, arrays.values, { rows: permutations, epochs });
          kernels.addGroupMoments(arrays.values, states[group], permutations, true);
          store(pair, group);
        }
      }
    }
    return out;
  };
}

export const ordersTask: Task = {
  id: '(b)',
  twin: 'orders.py',
  name: 'trial order, one independent order per site and permutation, N = 200',
  unit: 'M pair-surrogates/s',
  amount: (pairs * features * permutations) / 1e6,
  repeats: 11,
  mustReach: 0.9,
  ambitious: 1.0,
  prepare(folder) {
    const random = uniform(3);
    const phasors = new Float32Array(2 * features * sites * epochs);
    for (let i = 0; i < phasors.length; i += 2) {
      const angle = 2 * Math.PI * random();
      phasors[i] = Math.cos(angle);
      phasors[i + 1] = Math.sin(angle);
    }
    const orders = new Uint16Array(permutations * sites * epochs);
    for (let row = 0; row < permutations * sites; row++) {
      orders.set(order(epochs, random), row * epochs);
    }
    write(folder, 'phasors.c64', phasors);
    write(folder, 'orders.u16', orders);
    writeSettings(folder, sizes);
  },
  load,
  compare: (ours, twin) => agree(ours, twin, 1e-3, 'sum'),
};
