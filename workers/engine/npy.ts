/**
 * NPY, version 1.0: the open format for one array (numpy.lib.format, NEP 1). Little-endian,
 * row-major only, as every map of a run is. Used by the page that sends maps, the server that
 * checks them, and the figures that read a slice.
 */
const magic = [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59];

const arrays = {
  '<f4': Float32Array,
  '<u4': Uint32Array,
  '<u2': Uint16Array,
  '|u1': Uint8Array,
} as const;

export type NpyDtype = keyof typeof arrays;
export type NpyArray = Float32Array | Uint32Array | Uint16Array | Uint8Array;

export interface NpyHeader {
  dtype: NpyDtype;
  shape: number[];
  /** Where the first element lies. */
  dataOffset: number;
  /** Of the elements alone. */
  dataLength: number;
}

/** No header of ours is longer; a reader may stop looking for its end here. */
export const npyHeaderLimit = 1024;

export const bytesPerElement = (dtype: NpyDtype): number => arrays[dtype].BYTES_PER_ELEMENT;

export function dtypeOf(array: NpyArray): NpyDtype {
  const found = Object.entries(arrays).find(([, type]) => array instanceof type);
  if (!found) throw new TypeError('dtypeOf: array must be Float32, Uint32, Uint16 or Uint8');
  return found[0] as NpyDtype;
}

const elementCount = (shape: number[]): number => shape.reduce((product, n) => product * n, 1);

/** The bytes before the elements, padded so that these begin at a multiple of 64. */
export function npyHeader(dtype: NpyDtype, shape: number[]): Uint8Array<ArrayBuffer> {
  const dims = shape.length === 1 ? `${shape[0]},` : shape.join(', ');
  const dict = `{'descr': '${dtype}', 'fortran_order': False, 'shape': (${dims}), }`;
  const total = Math.ceil((10 + dict.length + 1) / 64) * 64;
  const bytes = new Uint8Array(total).fill(0x20);
  bytes.set(magic);
  bytes.set([1, 0, (total - 10) & 0xff, (total - 10) >> 8], 6);
  bytes.set(new TextEncoder().encode(dict), 10);
  bytes[total - 1] = 0x0a;
  return bytes;
}

/** Header and elements as parts of a Blob or a file, without copying the elements. */
export function npyParts(array: NpyArray, shape: number[]): [Uint8Array, Uint8Array] {
  if (elementCount(shape) !== array.length) {
    throw new RangeError(
      `npyParts: shape ${shape.join(' x ')} does not hold ${array.length} elements`,
    );
  }
  const bytes = new Uint8Array(array.buffer, array.byteOffset, array.byteLength);
  return [npyHeader(dtypeOf(array), shape), bytes];
}

/** Reads the header from a file's first bytes. Throws a RangeError that says what is wrong. */
export function parseNpyHeader(bytes: Uint8Array): NpyHeader {
  if (bytes.length < 10 || magic.some((byte, i) => bytes[i] !== byte)) {
    throw new RangeError('is no NPY file: the first bytes are not its mark');
  }
  if (bytes[6] !== 1) throw new RangeError(`has NPY version ${bytes[6]}; version 1 is read`);
  const dataOffset = 10 + bytes[8]! + bytes[9]! * 256;
  if (dataOffset > npyHeaderLimit || dataOffset > bytes.length) {
    throw new RangeError(`has an NPY header of ${dataOffset} bytes, longer than the file's start`);
  }
  const text = new TextDecoder('latin1').decode(bytes.subarray(10, dataOffset));
  const dtype = /'descr':\s*'([^']+)'/.exec(text)?.[1];
  if (!dtype || !Object.hasOwn(arrays, dtype)) {
    throw new RangeError(
      `has dtype ${dtype ?? 'none'}; ${Object.keys(arrays).join(', ')} are read`,
    );
  }
  if (!/'fortran_order':\s*False/.test(text)) throw new RangeError('is not in row-major order');
  const dims = /'shape':\s*\(([0-9, ]*)\)/.exec(text)?.[1];
  if (dims === undefined) throw new RangeError('states no shape in its NPY header');
  const shape = dims.split(',').flatMap((part) => (part.trim() ? [Number(part)] : []));
  const dataLength = elementCount(shape) * bytesPerElement(dtype as NpyDtype);
  return { dtype: dtype as NpyDtype, shape, dataOffset, dataLength };
}

/** The elements as the typed array that the header names; copied only where misaligned. */
export function npyElements(header: Pick<NpyHeader, 'dtype'>, data: Uint8Array): NpyArray {
  const type = arrays[header.dtype];
  const aligned = data.byteOffset % type.BYTES_PER_ELEMENT === 0 ? data : data.slice();
  const buffer = aligned.buffer as ArrayBuffer;
  return new type(buffer, aligned.byteOffset, aligned.byteLength / type.BYTES_PER_ELEMENT);
}

/** A whole file at once. Throws a RangeError where the length does not fit the header. */
export function parseNpy(file: Uint8Array): NpyHeader & { data: NpyArray } {
  const header = parseNpyHeader(file);
  const held = file.length - header.dataOffset;
  if (held !== header.dataLength) {
    throw new RangeError(`holds ${held} bytes of elements; its header says ${header.dataLength}`);
  }
  return { ...header, data: npyElements(header, file.subarray(header.dataOffset)) };
}
