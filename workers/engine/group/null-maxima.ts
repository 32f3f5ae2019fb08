import { clusterForest, joinClusters, releaseClusters } from '../../kernels/clusters';
import { planParts } from '../correct/plan-parts';
import { tailSigns, tailStatistic } from '../correct/tail';
import type { Plan } from '../plan';
import type { Axes, PairBlock } from '../types';

/** Gathers, over pairs and relabellings, what the corrections need of the t maps. */
export class NullMaxima {
  readonly maxStatistic: Float32Array;
  readonly maxClusterMass: Float32Array;
  readonly #test: Plan['test'];
  readonly #axes: Axes;
  readonly #points: Int32Array;
  readonly #forest;
  readonly #parts;

  constructor(axes: Axes, test: Plan['test']) {
    const featureCount = axes.frequenciesHz.length * axes.timesS.length;
    this.#axes = axes;
    this.#test = test;
    this.maxStatistic = new Float32Array(test.permutations).fill(-Infinity);
    this.maxClusterMass = new Float32Array(test.permutations);
    this.#points = new Int32Array(featureCount);
    this.#forest = clusterForest(featureCount);
    this.#parts = planParts(test).map(([id, part]) => ({
      id,
      part,
      gatherer: part.gatherer({ axes, test }),
    }));
  }

  begin(pair: number, observed: Float32Array): void {
    for (const { gatherer } of this.#parts) gatherer.begin(pair, observed);
  }

  /** The t map of the pair begun last under one relabelling. */
  add(relabelling: number, t: Float32Array): void {
    let largest = this.maxStatistic[relabelling];
    for (const value of t) largest = Math.max(largest, tailStatistic(value, this.#test.tail));
    this.maxStatistic[relabelling] = largest;
    for (const sign of tailSigns(this.#test.tail)) {
      const mass = this.#largestMass(t, sign);
      if (mass > this.maxClusterMass[relabelling]) this.maxClusterMass[relabelling] = mass;
    }
    for (const { gatherer } of this.#parts) gatherer.add(relabelling, t);
  }

  /** What single corrections need, merged as after a run. */
  parts(): PairBlock['parts'] {
    const context = { axes: this.#axes, test: this.#test };
    return Object.fromEntries(
      this.#parts.map(({ id, part, gatherer }) => [id, part.merge([gatherer.finish()], context)]),
    );
  }

  #largestMass(t: Float32Array, sign: -1 | 1): number {
    let pointCount = 0;
    for (let x = 0; x < t.length; x++) {
      if (sign * t[x] > this.#test.clusterFormingZ) this.#points[pointCount++] = x;
    }
    const size = { pointCount, timeCount: this.#axes.timesS.length };
    const mass = joinClusters(t, 0, this.#points, this.#forest, size);
    releaseClusters(this.#points, pointCount, this.#forest);
    return mass;
  }
}
