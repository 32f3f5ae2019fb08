import { newKernels } from '../../../workers/kernels';
import { clusterScratchLength } from '../../../workers/kernels/cluster-masses';
import { uniform } from '../random';
import { agree, readF32, write, writeSettings, type Task } from '../task';

const sizes = { maps: 1000, frequencies: 30, times: 100 };
const { maps, frequencies, times } = sizes;
const points = frequencies * times;
const marked = 0.05;

/** White noise, or the same smoothed over neighbours, in units of its standard deviation. */
function makeMaps(seed: number, passes: number): Float32Array {
  const random = uniform(seed);
  let z = Float32Array.from(
    { length: maps * points },
    () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random()),
  );
  for (let pass = 0; pass < passes; pass++) {
    const step = pass % 2 ? times : 1;
    const from = z;
    z = from.map((value, i) => value + (from[i - step] ?? 0) + (from[i + step] ?? 0));
  }
  const scale = 1 / Math.sqrt(z.reduce((sum, value) => sum + value * value, 0) / z.length);
  return z.map((value) => value * scale);
}

function load(folder: string) {
  const z = readF32(folder, 'maps.f32');
  const [formingZ] = readF32(folder, 'forming.f32');
  const kernels = newKernels();
  const stride = Math.ceil(points / 8) * 8;
  const bitStride = Math.ceil(stride / 64) * 8;
  const arrays = kernels.arrays({
    beyond: ['f32', maps * stride],
    positive: ['u8', maps * bitStride],
    negative: ['u8', maps * bitStride],
    masses: ['f32', maps],
    scratch: ['f64', clusterScratchLength(frequencies, times)],
  });
  for (let row = 0; row < maps; row++) {
    let count = 0;
    for (let x = 0; x < points; x++) {
      const value = z[row * points + x];
      if (!(value > formingZ)) continue;
      arrays.beyond[row * stride + count++] = value;
      arrays.positive[row * bitStride + (x >> 3)] |= 1 << (x & 7);
    }
  }
  const shape = {
    stride,
    bitStride,
    clusterFormingZ: formingZ,
    tailSign: 1 as const,
    binCount: 1,
    binsPerUnit: 1,
    binOffset: 0,
    permutations: maps,
  };
  const map = { rows: maps, frequencyCount: frequencies, timeCount: times, shape };
  return () => {
    arrays.masses.fill(0);
    kernels.addClusterMasses(arrays, arrays.masses, arrays.scratch, map);
    return arrays.masses;
  };
}

function clustersTask(kind: string, passes: number, mustReach: number, ambitious: number): Task {
  return {
    id: '(d)',
    twin: 'clusters.py',
    name: `cluster labelling 30 x 100, 5 % above, ${kind}, from marked points`,
    unit: 'thousand maps/s',
    amount: maps / 1000,
    repeats: 21,
    mustReach,
    ambitious,
    prepare(folder) {
      const z = makeMaps(5, passes);
      const sorted = z.slice().sort();
      const formingZ = sorted[Math.floor(sorted.length * (1 - marked))];
      write(folder, 'maps.f32', z);
      write(folder, 'forming.f32', Float32Array.of(formingZ));
      writeSettings(folder, { ...sizes, formingZ });
    },
    load,
    compare: (ours, twin) => agree(ours, twin, 1e-3, 'mass'),
  };
}

export const clusterTasks = [clustersTask('white', 0, 6, 10), clustersTask('smooth', 6, 12, 16)];
