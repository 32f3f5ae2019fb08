import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { canonicalJson, planHash, sha256Hex } from '../../../workers/engine';
import { samplePlan } from '../sample-plan';

const json = fc.jsonValue({ maxDepth: 4 });

/** The same value with the keys of every object put in another order. */
function reordered(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(reordered);
  if (typeof value !== 'object' || value === null) return value;
  return Object.fromEntries(
    Object.entries(value)
      .reverse()
      .map(([key, item]) => [key, reordered(item)]),
  );
}

describe('canonicalJson', () => {
  test('writes the example of RFC 8785, section 3.2.2', () => {
    // Source: RFC 8785 (JSON Canonicalization Scheme), its sample input and canonical form; text
    // from memory, MEM.
    const value: unknown = JSON.parse(String.raw`{
      "numbers": [333333333.33333329, 1E30, 4.50, 2e-3, 0.000000000000000000000000001],
      "string": "\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"\/",
      "literals": [null, true, false]
    }`);
    expect(canonicalJson(value)).toBe(
      '{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],' +
        '"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}',
    );
  });

  test('is JSON of the same value, whatever the order of keys', () => {
    fc.assert(
      fc.property(json, (value) => {
        const text = canonicalJson(value);
        expect(JSON.parse(text)).toEqual(JSON.parse(JSON.stringify(value)));
        expect(canonicalJson(reordered(value))).toBe(text);
      }),
    );
  });

  test('reads back every number as it was', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => {
        expect(JSON.parse(canonicalJson(value)) === value).toBe(true);
      }),
    );
  });

  test('writes typed arrays as arrays', () => {
    expect(canonicalJson({ b: Uint32Array.of(1, 2), a: Float32Array.of(0.5) })).toBe(
      '{"a":[0.5],"b":[1,2]}',
    );
  });

  test('names the place of what JSON cannot carry', () => {
    expect(() => canonicalJson({ a: [1, Number.NaN] })).toThrow('$.a[1] is NaN');
    expect(() => canonicalJson({ a: { b: undefined } })).toThrow('$.a.b is undefined');
    expect(() => canonicalJson([new Date(0)])).toThrow('$[0] is [object Date]');
    expect(() => canonicalJson({ z: Float32Array.of(0, Infinity) })).toThrow('$.z[1] is Infinity');
    expect(() => canonicalJson({ f: () => 1 })).toThrow(TypeError);
  });
});

describe('hashes', () => {
  test('SHA-256 of "abc" is the one of FIPS 180-4', async () => {
    // Source: NIST FIPS 180-4, example of one block. MEM
    expect(await sha256Hex('abc')).toBe(
      'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad',
    );
  });

  test('a plan keeps its hash through JSON and through any order of keys', async () => {
    const plan = samplePlan();
    const hash = await planHash(plan);
    expect(hash).toMatch(/^[0-9a-f]{64}$/);
    expect(await planHash(reordered(JSON.parse(JSON.stringify(plan))) as typeof plan)).toBe(hash);
  });

  test('any change of a plan changes its hash', async () => {
    const plan = samplePlan();
    const hash = await planHash(plan);
    const seed = { ...plan, test: { ...plan.test, seed: 'ebb' } };
    const longer = { ...plan, epoch: { ...plan.epoch, toS: 0.8000001 } };
    const order = { ...plan, sites: [...plan.sites].reverse() };
    for (const other of [seed, longer, order]) expect(await planHash(other)).not.toBe(hash);
  });
});
