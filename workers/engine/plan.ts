import { z } from 'zod';
import { measureIds, measureOf } from './measure/registry';
import { nullIds, nullModelOf } from './null/registry';
import { schemaOf, settingsSchema, type SettingField, type Settings } from './settings';
import { correctionIds } from './correct/registry';
import { mostFrequencies } from './phase/frequencies';
import { phaseSchema } from './phase/registry';

/** Limits that keep a run inside a laptop's memory; each error names them. */
export const planLimits = {
  sites: 512,
  frequencies: mostFrequencies,
  times: 2000,
  permutations: 100_000,
  features: 6_000_000,
} as const;

const finite = z.number();
const label = z.string().trim().min(1).max(80);
/** As it stands in the recording, blanks and all. */
const eventLabel = z.string().min(1).max(1000);
const sha256 = z.string().regex(/^[0-9a-f]{64}$/, 'must be 64 hexadecimal digits');

/** Which moments of a recording become epochs of a condition. */
export const ruleSchema = z.discriminatedUnion('kind', [
  z.strictObject({
    kind: z.literal('events'),
    recording: sha256,
    /** An event is taken when its label is one of these, exactly. */
    labels: z.array(eventLabel).min(1, 'choose at least one event label'),
  }),
  z
    .strictObject({
      kind: z.literal('even'),
      recording: sha256,
      fromS: finite.nonnegative(),
      toS: finite.nonnegative(),
      everyS: finite.positive('must be above 0 s'),
    })
    .refine((rule) => rule.toS >= rule.fromS, {
      path: ['toS'],
      message: 'must not be before the start of the span',
    }),
]);

const conditionSchema = z.strictObject({
  name: label,
  rules: z.array(ruleSchema).min(1, 'needs at least one rule').max(50),
});

export const pairsSchema = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('all') }),
  z.strictObject({ kind: z.literal('within'), sites: z.array(label).min(2) }),
  z.strictObject({
    kind: z.literal('between'),
    first: z.array(label).min(1),
    second: z.array(label).min(1),
  }),
  z.strictObject({ kind: z.literal('from'), site: label }),
]);

const planShape = z.strictObject({
  format: z.literal('nullwright-plan/1'),
  /** The question in words. */
  question: z.string().trim().min(1, 'say in words what is asked').max(2000),
  /** A code, never a name. */
  participant: label,
  recordings: z
    .array(z.strictObject({ sha256, name: z.string().min(1).max(255) }))
    .min(1, 'choose at least one recording')
    .max(50),
  a: conditionSchema,
  b: conditionSchema,
  epoch: z
    .strictObject({
      /** The window around each event, seconds; both ends included. */
      fromS: finite.min(-60).max(600),
      toS: finite.min(-60).max(600),
      /** Removed from each epoch with its guard. */
      detrend: z.enum(['mean', 'line']),
      reference: z.discriminatedUnion('kind', [
        z.strictObject({ kind: z.literal('recorded') }),
        z.strictObject({ kind: z.literal('average') }),
        z.strictObject({ kind: z.literal('laplacian') }),
        z.strictObject({ kind: z.literal('channels'), sites: z.array(label).min(1) }),
      ]),
      reject: z.strictObject({
        /** Left out when the peak-to-peak of any analysed site is above this. */
        aboveUv: finite.positive().nullable(),
        /** Left out when the peak-to-peak of any analysed site is below this. */
        flatBelowUv: finite.positive().nullable(),
        /** Events marked by hand: recording and onset in seconds. */
        byHand: z.array(z.strictObject({ recording: sha256, onsetS: finite })),
      }),
    })
    .refine((epoch) => epoch.toS > epoch.fromS, {
      path: ['toS'],
      message: 'must be after the start of the window',
    }),
  sites: z
    .array(label)
    .min(2, 'choose at least two sites')
    .max(planLimits.sites)
    .refine((sites) => new Set(sites).size === sites.length, { message: 'names a site twice' }),
  pairs: pairsSchema,
  phase: phaseSchema,
  times: z
    .strictObject({ fromS: finite, toS: finite, stepS: finite.positive('must be above 0 s') })
    .refine((times) => times.toS >= times.fromS, {
      path: ['toS'],
      message: 'must not be before the first time',
    }),
  measure: z.enum(measureIds),
  /** What the measure asks for besides, by its own registry entry. */
  measureSettings: settingsSchema.optional(),
  null: z.enum(nullIds),
  /** What the null asks for besides, by its own registry entry. */
  nullSettings: settingsSchema.optional(),
  test: z.strictObject({
    tail: z.enum(['two-sided', 'a-greater', 'b-greater']),
    alpha: finite.gt(0).max(0.5),
    permutations: z.int().min(19).max(planLimits.permutations),
    /** The first carries the claim; the page may move between the ones named here only. */
    corrections: z
      .array(z.enum(correctionIds))
      .min(1, 'choose at least one correction')
      .refine((list) => new Set(list).size === list.length, {
        message: 'names a correction twice',
      }),
    /** |z| above which points join a cluster. */
    clusterFormingZ: finite.positive().max(20),
    seed: z.string().trim().min(1, 'give a seed, any text').max(80),
  }),
});

/** Entries of the registries, as far as their settings go. */
interface Entry {
  name: string;
  settings?: readonly SettingField[];
}

function checkSettings(
  entry: Entry,
  given: Settings | undefined,
  field: string,
  context: z.RefinementCtx,
): void {
  const parsed = schemaOf(entry.settings ?? []).safeParse(given ?? {});
  for (const issue of parsed.error?.issues ?? []) {
    context.addIssue({
      code: 'custom',
      path: [field, ...issue.path],
      message:
        issue.code === 'unrecognized_keys'
          ? `must not be given for ${entry.name}: ${issue.keys.join(', ')}`
          : issue.message,
    });
  }
}

/** A plan, with what its measure and null ask for. */
export const planSchema = planShape.superRefine((plan, context) => {
  checkSettings(measureOf(plan.measure), plan.measureSettings, 'measureSettings', context);
  checkSettings(nullModelOf(plan.null), plan.nullSettings, 'nullSettings', context);
});

/** A contrast's definition, whole: what is locked, hashed and run. */
export type Plan = z.infer<typeof planSchema>;
export type Rule = z.infer<typeof ruleSchema>;
export type PairRule = z.infer<typeof pairsSchema>;
export type Tail = Plan['test']['tail'];
