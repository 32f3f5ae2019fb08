import { addClusterMasses } from './cluster-masses';
import { crossLanes, siteLanes, sumLanes } from './cross-lanes';
import { addGroupMaps, standardiseGroup } from './group-maps';
import { addGroupMoments } from './group-moments';
import { arrayBytes, layArrays, type Kernels } from './kernels';
import { sumLabelledLanes } from './label-lanes';
import { resultantDifferences, resultantsOfLanes } from './resultant-lanes';
import { sumShuffledLanes } from './shuffled-lanes';
import { standardisedDifferences } from './standardised-differences';

/** The kernels in TypeScript: the definition of what the compiled ones do, and their stand-in. */
export function plainKernels(): Kernels {
  return {
    kind: 'plain',
    arrays: (plan) => layArrays(plan, new ArrayBuffer(arrayBytes(plan)), 0),
    crossLanes,
    siteLanes,
    sumLanes,
    sumLabelledLanes,
    sumShuffledLanes,
    resultantDifferences,
    resultantsOfLanes,
    standardisedDifferences,
    addGroupMoments,
    addGroupMaps,
    standardiseGroup,
    addClusterMasses,
  };
}
