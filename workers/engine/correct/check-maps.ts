import { measureOf } from '../measure/registry';
import type { Plan } from '../plan';
import type { Axes } from '../types';
import type { ClaimMaps } from './correction';
import { planParts } from './plan-parts';

/**
 * Checks that maps have the plan's shape and that every number can be what it says: a server calls
 * it (through `concludeFrom`) on what it was sent.
 * @throws RangeError naming the map, the index and the value
 */
export function checkMaps(plan: Plan, axes: Axes, maps: ClaimMaps): void {
  const { permutations } = plan.test;
  const [least, most] = measureOf(plan.measure).range;
  const cells = axes.pairs.length * axes.frequenciesHz.length * axes.timesS.length;
  const within = (low: number, high: number) => (value: number) => value >= low && value <= high;
  const finite = (value: number) => Number.isFinite(value);
  check('observedA', maps.observedA, cells, within(least, most));
  check('observedB', maps.observedB, cells, within(least, most));
  check('lagA', maps.lagA, cells, within(-3.15, 3.15));
  check('lagB', maps.lagB, cells, within(-3.15, 3.15));
  check('nullSd', maps.nullSd, cells, (value) => finite(value) && value >= 0);
  check('z', maps.z, cells, finite);
  check('upper', maps.upper, cells, within(0, permutations));
  check('lower', maps.lower, cells, within(0, permutations));
  check('maxStatistic', maps.maxStatistic, permutations, finite);
  check('maxClusterMass', maps.maxClusterMass, permutations, (v) => finite(v) && v >= 0);
  for (const [id, part] of planParts(plan.test)) {
    const values = maps.parts[id];
    const fault = values ? part.fault(values, { axes, test: plan.test }) : 'is missing';
    if (fault) throw new RangeError(`what ${id} needs: ${fault}`);
  }
  for (let x = 0; x < cells; x++) {
    // Each surrogate is above, below or equal: the two counts cover all of them.
    if (maps.upper[x] + maps.lower[x] < permutations) {
      throw new RangeError(
        `upper and lower: ${maps.upper[x]} + ${maps.lower[x]} at ${x} leave out some of ${permutations} permutations`,
      );
    }
  }
}

function check(
  name: string,
  map: Float32Array | Uint32Array,
  length: number,
  fits: (value: number) => boolean,
): void {
  if (map.length !== length) {
    throw new RangeError(`${name}: ${map.length} values where the plan makes ${length}`);
  }
  for (let x = 0; x < length; x++) {
    if (!fits(map[x])) throw new RangeError(`${name}: ${map[x]} at ${x} is out of range`);
  }
}
