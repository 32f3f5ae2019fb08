import type { ResultEdge } from '../../../src/lib/model/result';

/** An invented edge with the values under test in place. */
export function sampleEdge(change: Partial<ResultEdge> = {}): ResultEdge {
  return {
    pair: 0,
    fromHz: 8,
    toHz: 12,
    fromS: 0.2,
    toS: 0.6,
    peakHz: 10,
    peakS: 0.4,
    peakPoint: 7,
    points: 12,
    observedA: 0.612,
    observedB: 0.318,
    difference: 0.294,
    z: 4.9,
    p: 0.002,
    pLow: 0,
    pHigh: 0.0074,
    adjustedP: 0.001,
    adjustedPLow: 0,
    adjustedPHigh: 0.0037,
    lagARad: 0.71,
    lagBRad: 0.3,
    cluster: 1,
    ...change,
  };
}
