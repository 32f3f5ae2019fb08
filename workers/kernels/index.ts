import { newCompiledKernels } from './compiled-kernels';
import type { Kernels } from './kernels';
import { plainKernels } from './plain';

export type { Kernels } from './kernels';

/** Which kernels to run: compiled where the machine can, unless told otherwise. */
export type KernelChoice = 'auto' | 'compiled' | 'plain';

/** Kernels that no work holds now; their memory is used again instead of being freed. */
const idle: Kernels[] = [];
let choice: KernelChoice = 'auto';

/** Chooses the kernels of work that begins after it, for tests and for measuring. */
export function chooseKernels(wanted: KernelChoice): void {
  choice = wanted;
  idle.length = 0;
}

/** Does some work with kernels that it holds alone until it ends. */
export function withKernels<T>(work: (kernels: Kernels) => T): T {
  const kernels = idle.pop() ?? newKernels();
  try {
    return work(kernels);
  } finally {
    idle.push(kernels);
  }
}

/** A fresh set of kernels. @throws CompileError when compiled ones are asked for and cannot be. */
export function newKernels(wanted: KernelChoice = choice): Kernels {
  if (wanted === 'plain') return plainKernels();
  try {
    return newCompiledKernels();
  } catch (problem) {
    // No WebAssembly, no SIMD, or a policy against it: the same numbers, more slowly.
    if (wanted === 'compiled') throw problem;
    return plainKernels();
  }
}
