import type { Axes, Edge } from '$engine';
import type { ResultEdge } from './result';

/** An engine's edge as results show it: with the peak's place on the axes, clusters numbered from 1. */
export function resultEdgeOf(edge: Edge, { frequenciesHz, timesS }: Axes): ResultEdge {
  return {
    pair: edge.pair,
    fromHz: edge.fromHz,
    toHz: edge.toHz,
    fromS: edge.fromS,
    toS: edge.toS,
    peakHz: frequenciesHz[Math.floor(edge.peakPoint / timesS.length)]!,
    peakS: timesS[edge.peakPoint % timesS.length]!,
    peakPoint: edge.peakPoint,
    points: edge.points,
    observedA: edge.observedA,
    observedB: edge.observedB,
    difference: edge.difference,
    z: edge.z,
    p: edge.p,
    pLow: edge.pInterval[0],
    pHigh: edge.pInterval[1],
    adjustedP: edge.adjustedP,
    adjustedPLow: edge.adjustedPInterval?.[0] ?? null,
    adjustedPHigh: edge.adjustedPInterval?.[1] ?? null,
    lagARad: edge.lagARad,
    lagBRad: edge.lagBRad,
    cluster: edge.cluster === null ? null : edge.cluster + 1,
  };
}
