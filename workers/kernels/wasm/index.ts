// AssemblyScript, not TypeScript: addresses in, nothing out. What each kernel does, its layout and
// its source stand at its plain twin in workers/kernels/<name>.ts.
export { addClusterMasses } from './cluster-masses';
export { crossLanes, siteLanes, sumLanes } from './cross-lanes';
export { addGroupMaps, standardiseGroup } from './group-maps';
export { addGroupMoments } from './group-moments';
export { sumLabelledLanes } from './label-lanes';
export { resultantDifferences, resultantsOfLanes } from './resultant-lanes';
export { sumShuffledLanes } from './shuffled-lanes';
export { standardisedDifferences } from './standardised-differences';

/** The first address that arrays may take. */
export function heapBase(): usize {
  return __heap_base;
}
