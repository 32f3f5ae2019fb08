import { z } from 'zod';

/** What the page tells the server about a run; the server checks it all again. */

export const runStates = ['running', 'paused', 'stopped', 'failed', 'finished'] as const;
export type RunState = (typeof runStates)[number];

const sha256 = z.string().regex(/^[0-9a-f]{64}$/, 'must be 64 hexadecimal digits');
const workerCount = z.int().min(1).max(1024);

export const newRunSchema = z.strictObject({
  /** Of the plan the page shows: a page left open over a new version is told so. */
  planHash: sha256,
  engineVersion: z.string().max(40),
  workerCount,
});
export type NewRun = z.infer<typeof newRunSchema>;

/** Finishing is no change of state that can be asked for: it is what storing a result does. */
export const runChangeSchema = z.strictObject({
  state: z.enum(['running', 'paused', 'stopped', 'failed']).optional(),
  progress: z.number().min(0).max(1).optional(),
  workerCount: workerCount.optional(),
  failure: z.string().trim().min(1).max(2000).optional(),
});
export type RunChange = z.infer<typeof runChangeSchema>;

export const lossReasons = [
  'guard-leaves-recording',
  'crosses-gap',
  'above-limit',
  'flat',
  'by-hand',
] as const;

const lostEpochSchema = z.strictObject({
  condition: z.enum(['a', 'b']),
  recording: sha256,
  onsetS: z.number(),
  label: z.string().max(1000),
  reason: z.enum(lossReasons),
  site: z.string().max(80).optional(),
  valueUv: z.number().optional(),
});

const seconds = z.number().nonnegative();
export const timingsSchema = z.strictObject({
  fetchS: seconds,
  screenS: seconds,
  phasesS: seconds,
  pairsS: seconds,
  concludeS: seconds,
});
export type Timings = z.infer<typeof timingsSchema>;

/** About 20 MB of JSON; the step-down's intervals of 100,000 permutations stay below. */
const mostPartValues = 1_000_000;
const distribution = z.array(z.number()).max(100_000);
export const runSummarySchema = z.strictObject({
  planHash: sha256,
  engineVersion: z.string().max(40),
  digest: sha256,
  workerCount,
  keptA: z.int().nonnegative(),
  keptB: z.int().nonnegative(),
  /** Every epoch that was left out, also those that the metadata alone rule out. */
  lost: z.array(lostEpochSchema).max(200_000),
  maxStatistic: distribution,
  clusterMass: distribution,
  /** What single corrections of the plan need besides, by their id; the engine checks them. */
  parts: z.record(z.string(), z.array(z.number()).max(mostPartValues)).optional(),
  timings: timingsSchema,
});
/** What a browser or the headless runner says of its finished run, besides the maps. */
export type RunSummary = z.infer<typeof runSummarySchema>;
