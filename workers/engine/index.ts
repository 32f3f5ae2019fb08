/** The engine's public face: what the pages, the server and the headless runner may import. */
export * from './types';
export { engineVersion } from './version';
export { planLimits, planSchema, type Plan, type Rule } from './plan';
export { PlanError } from './errors';
export { axesOf, planEpochs } from './prepare';
export {
  consequencesOf,
  type Caution,
  type CautionCode,
  type Consequences,
  type EpochCounts,
} from './consequences';
export type { KernelWidth, PhaseMethod } from './phase/method';
export { morletKernel } from './phase/morlet';
export { phaseMethods } from './phase/registry';
export * from './read';
