/** `node scripts/build-kernels.mjs`: the kernels alone; start, dev, test and build do it by themselves. */
import { ensureKernels } from './lib/kernels.mjs';

ensureKernels();
