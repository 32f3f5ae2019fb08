/**
 * One text for one value: JSON with sorted keys, no spaces and the shortest number that reads back
 * the same, after RFC 8785. Typed arrays are written as arrays.
 * @throws TypeError naming the path of anything JSON cannot carry (NaN, undefined, a function)
 * @example canonicalJson({ b: 1.5, a: [true, null] }) // '{"a":[true,null],"b":1.5}'
 */
export function canonicalJson(value: unknown): string {
  return write(value, '$');
}

function write(value: unknown, path: string): string {
  if (value === null || typeof value === 'boolean') return String(value);
  if (typeof value === 'string') return JSON.stringify(value);
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new TypeError(`${path} is ${value}: not a JSON number`);
    return JSON.stringify(value);
  }
  if (isNumberList(value)) return `[${numbers(value, path)}]`;
  if (Array.isArray(value)) {
    return `[${Array.from(value, (item, i) => write(item, `${path}[${i}]`)).join(',')}]`;
  }
  if (isPlain(value)) return `{${members(value, path)}}`;
  throw new TypeError(`${path} is ${describe(value)}: not a JSON value`);
}

function members(value: Record<string, unknown>, path: string): string {
  return Object.keys(value)
    .sort()
    .map((key) => `${JSON.stringify(key)}:${write(value[key], `${path}.${key}`)}`)
    .join(',');
}

type NumberList = Float32Array | Float64Array | Uint8Array | Uint16Array | Uint32Array | Int32Array;

function isNumberList(value: unknown): value is NumberList {
  return ArrayBuffer.isView(value) && !(value instanceof DataView) && 'length' in value;
}

function numbers(list: NumberList, path: string): string {
  const bad = list.findIndex((item) => !Number.isFinite(item));
  if (bad >= 0) throw new TypeError(`${path}[${bad}] is ${list[bad]}: not a JSON number`);
  return list.join(',');
}

function isPlain(value: unknown): value is Record<string, unknown> {
  if (typeof value !== 'object' || value === null) return false;
  const prototype: unknown = Object.getPrototypeOf(value);
  return prototype === Object.prototype || prototype === null;
}

function describe(value: unknown): string {
  return typeof value === 'object' ? Object.prototype.toString.call(value) : typeof value;
}
