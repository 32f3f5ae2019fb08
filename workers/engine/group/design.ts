import type { Axes } from '../types';

/** What is compared over participants. */
export type GroupDesign =
  /** One map a participant, such as a contrast or its z: is its mean over participants zero? */
  | { kind: 'paired' }
  /** Two groups of participants: have their maps the same mean? `inFirst[i]` is participant i's. */
  | { kind: 'between'; inFirst: boolean[]; variance: 'pooled' | 'unequal' };

/** A participant's map [pair][frequency][time], and a name for messages. */
export interface ParticipantMap {
  name: string;
  values: Float32Array;
}

const fewest = 2;

/**
 * Checks that the maps fit the design and each other.
 * @throws RangeError naming the participant, the place and the value
 */
export function checkGroup(axes: Axes, participants: ParticipantMap[], design: GroupDesign): void {
  const cells = axes.pairs.length * axes.frequenciesHz.length * axes.timesS.length;
  for (const { name, values } of participants) {
    if (values.length !== cells) {
      throw new RangeError(
        `groupLevel: the map of ${name} has ${values.length} values where the axes make ${cells}`,
      );
    }
    const bad = values.findIndex((value) => !Number.isFinite(value));
    if (bad >= 0) {
      throw new RangeError(
        `groupLevel: the map of ${name} is ${values[bad]} at ${placeOf(bad, axes)}; leave the participant out, or run the contrast again`,
      );
    }
  }
  for (const [of, count] of sizesOf(participants, design)) {
    if (count >= fewest) continue;
    throw new RangeError(`groupLevel: ${count} participants ${of}; at least ${fewest} are needed`);
  }
}

function sizesOf(participants: ParticipantMap[], design: GroupDesign): [string, number][] {
  if (design.kind === 'paired') return [['are given', participants.length]];
  if (design.inFirst.length !== participants.length) {
    throw new RangeError(
      `groupLevel: inFirst has ${design.inFirst.length} entries for ${participants.length} participants`,
    );
  }
  const first = design.inFirst.filter(Boolean).length;
  return [
    ['are in the first group', first],
    ['are in the second group', participants.length - first],
  ];
}

function placeOf(index: number, { sites, pairs, frequenciesHz, timesS }: Axes): string {
  const points = frequenciesHz.length * timesS.length;
  const [j, k] = pairs[Math.floor(index / points)];
  const point = index % points;
  return `${sites[j]} and ${sites[k]}, ${frequenciesHz[Math.floor(point / timesS.length)]} Hz, ${timesS[point % timesS.length]} s`;
}
