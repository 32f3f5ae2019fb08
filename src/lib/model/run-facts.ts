import type { Axes, LostEpoch } from '$engine';
import type { RunSummary, Timings } from './run';

/** What is kept of a finished run besides its rows and maps: the facts its pages show. */
export interface RunFacts {
  axes: Axes;
  plannedA: number;
  plannedB: number;
  keptA: number;
  keptB: number;
  lostCount: number;
  lost: LostEpoch[] | RunSummary['lost'];
  /** Features tested: pairs x frequencies x times. */
  tests: number;
  permutations: number;
  timings: Timings;
  /** All clusters found, claimed or not. */
  clusters: number;
  /** By correction: the smallest difference that would have passed; null where none can. */
  smallestDifference: Record<string, number | null>;
  /** By correction: the smallest |z| or mass that passes; null where none can. */
  criticalValue: Record<string, number | null>;
}
