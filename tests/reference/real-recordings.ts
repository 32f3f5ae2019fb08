import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Plan } from '../../workers/engine/plan';
import type { RecordingSource } from '../../workers/engine/prepare/read-epoch';
import { bytesOf, factsOf, openEdf, siteOf } from '../../workers/engine/read';

/** Folder of the real recordings and of what an independent reading of them gives. */
export const folder = process.env.RECORDINGS_DIR;

/** Why the tests on real recordings do not run; printed, never silent. */
export const skipReason =
  folder === undefined
    ? 'RECORDINGS_DIR is unset: the comparison with real recordings is left out'
    : null;

/** One set of expected.json; arrays are [pair][frequency][time]. */
export interface ExpectedSet {
  channels: string[];
  frequencies: number[];
  times: number[];
  epochs: { A: number; B: number };
  pairs: [string, string][];
  ispcA: number[][][];
  ispcB: number[][][];
  /** [pair][frequency and time]. */
  z_at_4000_permutations?: number[][];
}

export function expectedSets(): { eyes: ExpectedSet; fists: ExpectedSet } {
  return JSON.parse(readFileSync(join(folder!, 'expected.json'), 'utf8'));
}

export async function realRecording(name: string): Promise<RecordingSource> {
  const bytes = readFileSync(join(folder!, name));
  const sha256 = createHash('sha256').update(bytes).digest('hex');
  const source = bytesOf(bytes);
  const { facts } = await factsOf(await openEdf(source), { sha256, name });
  return { facts, source };
}

/** Eyes closed against eyes open, epochs every second, as expected.json states it. */
export function eyesPlan(set: ExpectedSet, closed: string, open: string): Plan {
  const every = { kind: 'even', fromS: 2, toS: 56, everyS: 1 } as const;
  return {
    ...common(set),
    recordings: [
      { sha256: closed, name: 'eyes-closed.edf' },
      { sha256: open, name: 'eyes-open.edf' },
    ],
    a: { name: 'closed', rules: [{ ...every, recording: closed }] },
    b: { name: 'open', rules: [{ ...every, recording: open }] },
    epoch: { ...common(set).epoch, fromS: 0, toS: 1 },
    times: { fromS: 0.1, toS: 0.9, stepS: 0.2 },
  };
}

/** Right fist against left fist, 5 cycles at 10 Hz and 7 at 20 Hz, as expected.json states it. */
export function fistsPlan(set: ExpectedSet, sha256: string): Plan {
  return {
    ...common(set),
    recordings: [{ sha256, name: 'fists.edf' }],
    a: { name: 'right', rules: [{ kind: 'events', recording: sha256, labels: ['T2'] }] },
    b: { name: 'left', rules: [{ kind: 'events', recording: sha256, labels: ['T1'] }] },
    epoch: { ...common(set).epoch, fromS: -0.5, toS: 3.5 },
    phase: { ...common(set).phase, method: 'morlet', cycles: { from: 5, to: 7 } },
    times: { fromS: 0, toS: 3, stepS: 1 },
  };
}

function common(set: ExpectedSet): Omit<Plan, 'recordings' | 'a' | 'b' | 'times'> {
  return {
    format: 'nullwright-plan/1',
    question: 'Does the engine give what an independent reading of the definitions gives?',
    participant: 'S001',
    epoch: {
      fromS: 0,
      toS: 1,
      detrend: 'mean',
      reference: { kind: 'recorded' },
      reject: { aboveUv: null, flatBelowUv: null, byHand: [] },
    },
    sites: set.channels.map((label) => siteOf(label)!),
    pairs: { kind: 'all' },
    phase: {
      method: 'morlet',
      frequencies: { kind: 'list', hz: set.frequencies },
      cycles: { from: 5, to: 5 },
    },
    measure: 'ispc',
    null: 'labels',
    test: {
      tail: 'two-sided',
      alpha: 0.05,
      permutations: 4000,
      corrections: ['max-statistic'],
      clusterFormingZ: 2,
      seed: 'expected',
    },
  };
}
