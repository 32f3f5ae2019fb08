import fc from 'fast-check';
import {
  correctionIds,
  initialSettings,
  measureIds,
  measureOf,
  nullIds,
  nullModelOf,
  type Plan,
  type SettingField,
} from '$engine';

const number = (min: number, max: number) =>
  fc.double({ min, max, noNaN: true }).map((value) => (value === 0 ? 0 : value));
const label = fc
  .string({ minLength: 1, maxLength: 20 })
  .map((text) => text.trim())
  .filter((text) => text.length > 0);
const sha256 = fc
  .uint8Array({ minLength: 32, maxLength: 32 })
  .map((bytes) => Buffer.from(bytes).toString('hex'));
const sites = (minLength: number) => fc.uniqueArray(label, { minLength, maxLength: minLength + 6 });
const span = fc.tuple(number(0, 500), number(0, 500)).map((pair) => pair.sort((x, y) => x - y));

const rule = (recordings: string[]) =>
  fc.oneof(
    fc.record({
      kind: fc.constant('events' as const),
      recording: fc.constantFrom(...recordings),
      labels: fc.uniqueArray(label, { minLength: 1, maxLength: 4 }),
    }),
    fc
      .record({ recording: fc.constantFrom(...recordings), span, everyS: number(0.01, 10) })
      .map(({ recording, span: [fromS, toS], everyS }) => ({
        kind: 'even' as const,
        recording,
        fromS,
        toS,
        everyS,
      })),
  );

const condition = (recordings: string[]) =>
  fc.record({ name: label, rules: fc.array(rule(recordings), { minLength: 1, maxLength: 4 }) });

const epoch = fc.record({
  fromS: number(-60, 0),
  toS: number(0.001, 600),
  detrend: fc.constantFrom('mean' as const, 'line' as const),
  reference: fc.oneof(
    fc.constant({ kind: 'recorded' as const }),
    fc.constantFrom({ kind: 'average' as const }, { kind: 'laplacian' as const }),
    sites(1).map((list) => ({ kind: 'channels' as const, sites: list })),
  ),
  reject: fc.record({
    aboveUv: fc.option(number(0.001, 1e6)),
    flatBelowUv: fc.option(number(0.001, 1e6)),
    byHand: fc.array(fc.record({ recording: sha256, onsetS: number(0, 1e5) }), { maxLength: 3 }),
  }),
});

const pairs = fc.oneof(
  fc.constant({ kind: 'all' as const }),
  sites(2).map((list) => ({ kind: 'within' as const, sites: list })),
  fc.record({ kind: fc.constant('between' as const), first: sites(1), second: sites(1) }),
  fc.record({ kind: fc.constant('from' as const), site: label }),
);

const frequencies = fc.oneof(
  fc.record({
    kind: fc.constant('grid' as const),
    fromHz: number(0.1, 200),
    toHz: number(0.1, 200),
    steps: fc.integer({ min: 1, max: 200 }),
    spacing: fc.constantFrom('log' as const, 'linear' as const),
  }),
  fc.record({
    kind: fc.constant('list' as const),
    hz: fc.array(number(0.1, 200), { minLength: 1, maxLength: 12 }),
  }),
);

const test = fc.record({
  tail: fc.constantFrom('two-sided' as const, 'a-greater' as const, 'b-greater' as const),
  alpha: number(1e-6, 0.5),
  permutations: fc.integer({ min: 19, max: 100_000 }),
  corrections: fc.shuffledSubarray([...correctionIds], { minLength: 1 }),
  clusterFormingZ: number(0.01, 20),
  seed: label,
});

/** Follows the order of first mention, as the form makes it. */
function withRecordings(plan: Omit<Plan, 'recordings'>): Plan {
  const named = [...plan.a.rules, ...plan.b.rules].map((each) => each.recording);
  const recordings = [...new Set(named)].map((hash) => ({
    sha256: hash,
    name: `${hash.slice(0, 6)}.edf`,
  }));
  return { ...plan, recordings };
}

/** With what its measure and null ask for, as they begin. */
function withSettings(plan: Plan): Plan {
  const measure: { settings?: readonly SettingField[] } = measureOf(plan.measure);
  const model: { settings?: readonly SettingField[] } = nullModelOf(plan.null);
  return {
    ...plan,
    ...(measure.settings ? { measureSettings: initialSettings(measure.settings) } : {}),
    ...(model.settings ? { nullSettings: initialSettings(model.settings) } : {}),
  };
}

/** Any plan that the schema takes. */
export const arbitraryPlan: fc.Arbitrary<Plan> = fc
  .uniqueArray(sha256, { minLength: 1, maxLength: 3 })
  .chain((recordings) =>
    fc.record({
      format: fc.constant('nullwright-plan/1' as const),
      question: label,
      participant: label,
      a: condition(recordings),
      b: condition(recordings),
      epoch,
      sites: sites(2),
      pairs,
      phase: fc.oneof(
        fc.record({
          method: fc.constant('morlet' as const),
          frequencies,
          cycles: fc.record({ from: number(1, 50), to: number(1, 50) }),
        }),
        fc.record({
          method: fc.constant('stft' as const),
          frequencies,
          taperS: number(0.1, 10),
        }),
        fc.record({
          method: fc.constant('filter-hilbert' as const),
          frequencies,
          halfWidth: fc.oneof(
            fc.record({ value: number(0.01, 0.9), unit: fc.constant('share' as const) }),
            fc.record({ value: number(0.1, 10), unit: fc.constant('Hz' as const) }),
          ),
        }),
      ),
      times: fc
        .record({ span, stepS: number(0.001, 10) })
        .map(({ span: [fromS, toS], stepS }) => ({ fromS, toS, stepS })),
      measure: fc.constantFrom(...measureIds),
      null: fc.constantFrom(...nullIds),
      test,
    }),
  )
  .map(withRecordings)
  .map(withSettings);
