import { execFileSync } from 'node:child_process';
import { describe, expect, test } from 'vitest';
import { npyHeader, npyParts, parseNpy, parseNpyHeader, type NpyArray } from '$workers/engine/npy';

// Outside values: NumPy's own reader and writer (Debian's python3-numpy) at test time. COMP.

const arrays: [string, NpyArray, number[]][] = [
  ['<f4', Float32Array.of(0.1, -2, 3.5e-8, Infinity, 5, 6), [2, 3]],
  ['<u4', Uint32Array.of(0, 1, 4_294_967_295), [3]],
  ['<u2', Uint16Array.of(0, 65_535, 7, 9, 1, 2, 3, 4), [2, 2, 2]],
  ['|u1', Uint8Array.of(1, 2, 255), [1, 3]],
];

interface Seen {
  dtype: string;
  shape: number[];
  values: (number | string)[];
}

function numpy(script: string, input: string): string {
  return execFileSync('/usr/bin/python3', ['-c', script], { input, encoding: 'utf8' });
}

describe.each(arrays)('NPY of %s', (dtype, array, shape) => {
  const [header, bytes] = npyParts(array, shape);
  const file = Buffer.concat([header, bytes]);

  test('is read by NumPy as it was written', () => {
    const seen = JSON.parse(
      numpy(
        `import base64, io, json, sys, numpy as np
a = np.load(io.BytesIO(base64.b64decode(sys.stdin.read())))
print(json.dumps({'dtype': a.dtype.str, 'shape': list(a.shape), 'values': [str(v) if np.isinf(v) else v.item() for v in a.ravel()]}))`,
        file.toString('base64'),
      ),
    ) as Seen;
    const plain = Array.from(array, (v) => (Number.isFinite(v) ? v : 'inf'));
    expect(seen).toEqual({ dtype, shape, values: plain });
    expect(header.length % 64).toBe(0);
  });

  test('is read here as NumPy writes it', () => {
    const written = numpy(
      `import base64, io, json, sys, numpy as np
given = json.loads(sys.stdin.read())
raw = base64.b64decode(given['data'])
out = io.BytesIO()
np.save(out, np.frombuffer(raw, dtype=given['dtype']).reshape(given['shape']))
print(base64.b64encode(out.getvalue()).decode())`,
      JSON.stringify({ dtype, shape, data: Buffer.from(bytes).toString('base64') }),
    );
    const read = parseNpy(Buffer.from(written, 'base64'));
    expect(read.dtype).toBe(dtype);
    expect(read.shape).toEqual(shape);
    expect([...read.data]).toEqual([...array]);
  });
});

describe('an NPY header', () => {
  test('says where a slice of the first axis lies', () => {
    const header = npyHeader('<f4', [496, 14, 26]);
    const { dataOffset, dataLength } = parseNpyHeader(header);
    expect(dataOffset).toBe(header.length);
    expect(dataLength).toBe(496 * 14 * 26 * 4);
  });

  test('that is cut, of another version, order or type is refused with the reason', () => {
    const good = npyHeader('<f4', [4]);
    const text = new TextDecoder().decode(good);
    const altered = (from: string, to: string) =>
      Uint8Array.from(text.replace(from, to), (char, i) => (i < 10 ? good[i] : char.charCodeAt(0)));
    expect(() => parseNpyHeader(good.subarray(0, 20))).toThrow("longer than the file's start");
    expect(() => parseNpyHeader(Uint8Array.of(1, 2, 3))).toThrow('is no NPY file');
    expect(() => parseNpyHeader(good.with(6, 3))).toThrow('has NPY version 3');
    expect(() => parseNpyHeader(altered('False', 'True '))).toThrow('not in row-major order');
    expect(() => parseNpyHeader(altered('<f4', '>f4'))).toThrow('has dtype >f4');
    expect(() => parseNpy(good)).toThrow('holds 0 bytes of elements; its header says 16');
  });
});
