import { judged, type Claims } from '../correct/conclude';
import type { Plan } from '../plan';
import type { Axes, CorrectionOutcome, Edge } from '../types';
import { checkGroup, type GroupDesign, type ParticipantMap } from './design';
import { NullMaxima } from './null-maxima';
import { relabellings } from './relabellings';
import { groupStatistic, type GroupMeans } from './t-statistic';

export interface GroupInput {
  axes: Axes;
  participants: ParticipantMap[];
  design: GroupDesign;
  /** As a plan's; the forming threshold is one of t, and A stands for the first group, or above 0. */
  test: Plan['test'];
}

/** A claimed region over participants: `observedA` and `observedB` are means, `z` is t. */
export type GroupEdge = Omit<Edge, 'lagARad' | 'lagBRad'>;

export interface GroupOutcome extends Omit<Claims, 'corrections'>, GroupMeans {
  /** t over participants, [pair][frequency][time]. */
  t: Float32Array;
  /** Relabellings with t at or above, and at or below, the observed t. */
  upper: Uint32Array;
  lower: Uint32Array;
  maxStatistic: Float32Array;
  maxClusterMass: Float32Array;
  corrections: (Omit<CorrectionOutcome, 'edges'> & { edges: GroupEdge[] })[];
  /** Beside the identity; where they are all there are, p is exact and its interval a point. */
  relabellings: { count: number; exact: boolean };
}

/** Relative tolerance of two f64 t that are equal but for rounding. */
const tie = 1e-9;

/**
 * The group level (numerics, section 5): t across participants of each feature, held against sign
 * flips (paired) or dealt group labels (between), all of them where these are at most the
 * permutations asked for. The corrections are those of a single contrast, with t in the place of z:
 * t is standardised already, and its null is nearly the same for every feature.
 * @param onPair hears how many pairs are done
 * @throws RangeError when maps or groups do not fit, or a map holds NaN
 * Cost: pairs x features x participants x relabellings; memory does not grow with the relabellings
 * but for their marks.
 * Source: Fisher 1935, section 21; Pitman 1937; Nichols and Holmes 2002 (maximum over maps); Maris
 * and Oostenveld 2007 (clusters of t).
 */
export function groupLevel(
  { axes, participants, design, test: asked }: GroupInput,
  onPair: (pairsDone: number) => void = () => undefined,
): GroupOutcome {
  checkGroup(axes, participants, design);
  const drawn = relabellings(design, participants.length, asked.permutations, asked.seed);
  const test = { ...asked, permutations: drawn.count };
  const featureCount = axes.frequenciesHz.length * axes.timesS.length;
  const maps = newMaps(axes.pairs.length * featureCount);
  const maxima = new NullMaxima(axes, test);
  const identity = participants.map((_, i) =>
    Number(design.kind === 'between' && design.inFirst[i]),
  );
  const surrogate = new Float64Array(featureCount);
  const surrogate32 = new Float32Array(featureCount);
  const observed = new Float64Array(featureCount);
  for (let pair = 0; pair < axes.pairs.length; pair++) {
    const part = partOf(maps, pair * featureCount, featureCount);
    const values = valuesOf(participants, pair * featureCount, featureCount);
    const statistic = groupStatistic(design, values, featureCount);
    statistic.write(identity, observed, part);
    part.t.set(observed);
    maxima.begin(pair, part.t);
    for (let p = 0; p < drawn.count; p++) {
      const row = p * participants.length;
      statistic.write(drawn.marks.subarray(row, row + participants.length), surrogate);
      countExceedances(surrogate, observed, part);
      surrogate32.set(surrogate);
      maxima.add(p, surrogate32);
    }
    onPair(pair + 1);
  }
  return outcomeOf(axes, test, maps, maxima, drawn);
}

type GroupMaps = Pick<GroupOutcome, 't' | 'upper' | 'lower' | keyof GroupMeans>;

function newMaps(cells: number): GroupMaps {
  return {
    t: new Float32Array(cells),
    upper: new Uint32Array(cells),
    lower: new Uint32Array(cells),
    first: new Float32Array(cells),
    second: new Float32Array(cells),
    standardError: new Float32Array(cells),
  };
}

/** Views of one pair's features. */
function partOf(maps: GroupMaps, from: number, count: number): GroupMaps {
  const to = from + count;
  return {
    t: maps.t.subarray(from, to),
    upper: maps.upper.subarray(from, to),
    lower: maps.lower.subarray(from, to),
    first: maps.first.subarray(from, to),
    second: maps.second.subarray(from, to),
    standardError: maps.standardError.subarray(from, to),
  };
}

function valuesOf(participants: ParticipantMap[], from: number, count: number): Float64Array {
  const values = new Float64Array(participants.length * count);
  participants.forEach((participant, i) => {
    values.set(participant.values.subarray(from, from + count), i * count);
  });
  return values;
}

function countExceedances(surrogate: Float64Array, observed: Float64Array, out: GroupMaps): void {
  for (let x = 0; x < observed.length; x++) {
    const tolerance = tie * Math.max(1, Math.abs(observed[x]));
    if (surrogate[x] >= observed[x] - tolerance) out.upper[x]++;
    if (surrogate[x] <= observed[x] + tolerance) out.lower[x]++;
  }
}

function outcomeOf(
  axes: Axes,
  test: Plan['test'],
  maps: GroupMaps,
  maxima: NullMaxima,
  { count, exact }: GroupOutcome['relabellings'],
): GroupOutcome {
  const { maxStatistic, maxClusterMass } = maxima;
  const noLag = new Float32Array(maps.t.length);
  const { corrections, ...claims } = judged(axes, test, {
    observedA: maps.first,
    observedB: maps.second,
    lagA: noLag,
    lagB: noLag,
    nullSd: maps.standardError,
    z: maps.t,
    upper: maps.upper,
    lower: maps.lower,
    maxStatistic,
    maxClusterMass,
    parts: maxima.parts(),
  });
  return {
    ...maps,
    ...claims,
    maxStatistic,
    maxClusterMass,
    corrections: corrections.map((correction) => ({
      ...correction,
      edges: correction.edges.map((edge) => groupEdge(edge, exact)),
    })),
    relabellings: { count, exact },
  };
}

/** The edge without lags, which a mean over participants has not; exact p have no error. */
function groupEdge({ lagARad: _a, lagBRad: _b, ...edge }: Edge, exact: boolean): GroupEdge {
  if (!exact) return edge;
  const { p, adjustedP, adjustedPInterval } = edge;
  return {
    ...edge,
    pInterval: [p, p],
    adjustedPInterval: adjustedPInterval && [adjustedP, adjustedP],
  };
}
