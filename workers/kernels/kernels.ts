import type { addClusterMasses } from './cluster-masses';
import type { crossLanes, siteLanes, sumLanes } from './cross-lanes';
import type { addGroupMaps, standardiseGroup } from './group-maps';
import type { addGroupMoments } from './group-moments';
import type { sumLabelledLanes } from './label-lanes';
import type { resultantDifferences, resultantsOfLanes } from './resultant-lanes';
import type { sumShuffledLanes } from './shuffled-lanes';
import type { standardisedDifferences } from './standardised-differences';

const arrayTypes = {
  f32: Float32Array,
  f64: Float64Array,
  u8: Uint8Array,
  u16: Uint16Array,
  u32: Uint32Array,
} as const;

type ArrayKind = keyof typeof arrayTypes;

/** Name, kind and length of each array that a piece of work needs. */
export type ArrayPlan = Record<string, readonly [ArrayKind, number]>;

export type Arrays<Plan extends ArrayPlan> = {
  [Name in keyof Plan]: InstanceType<(typeof arrayTypes)[Plan[Name][0]]>;
};

/**
 * The hot loops of a run, compiled or plain; both round alike, so that counts and digests do not
 * depend on which one runs. Features are worked on in groups of eight, the lanes of two vectors.
 */
export interface Kernels {
  kind: 'compiled' | 'plain';
  /**
   * Zeroed arrays that the kernels can work on. Taking new ones gives the former up: one piece of
   * work at a time.
   */
  arrays<Plan extends ArrayPlan>(plan: Plan): Arrays<Plan>;
  crossLanes: typeof crossLanes;
  siteLanes: typeof siteLanes;
  sumLanes: typeof sumLanes;
  sumLabelledLanes: typeof sumLabelledLanes;
  sumShuffledLanes: typeof sumShuffledLanes;
  resultantDifferences: typeof resultantDifferences;
  resultantsOfLanes: typeof resultantsOfLanes;
  standardisedDifferences: typeof standardisedDifferences;
  addGroupMoments: typeof addGroupMoments;
  addGroupMaps: typeof addGroupMaps;
  standardiseGroup: typeof standardiseGroup;
  addClusterMasses: typeof addClusterMasses;
}

/** Vectors are read whole: an address is a multiple of their 16 bytes. */
const alignment = 16;

/** Bytes that the arrays of a plan take side by side. */
export function arrayBytes(plan: ArrayPlan): number {
  let bytes = 0;
  for (const [kind, length] of Object.values(plan)) {
    bytes += aligned(length * arrayTypes[kind].BYTES_PER_ELEMENT);
  }
  return bytes;
}

/** Lays the arrays of a plan out in a buffer from `start` on, zeroed. */
export function layArrays<Plan extends ArrayPlan>(
  plan: Plan,
  buffer: ArrayBuffer,
  start: number,
): Arrays<Plan> {
  let at = aligned(start);
  new Uint8Array(buffer, at, arrayBytes(plan)).fill(0);
  const entries = Object.entries(plan).map(([name, [kind, length]]) => {
    const array = new arrayTypes[kind](buffer, at, length);
    at += aligned(array.byteLength);
    return [name, array] as const;
  });
  return Object.fromEntries(entries) as Arrays<Plan>;
}

function aligned(bytes: number): number {
  return Math.ceil(bytes / alignment) * alignment;
}
