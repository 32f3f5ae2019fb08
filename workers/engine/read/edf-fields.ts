import { EdfError } from './edf-error';

const latin1 = new TextDecoder('latin1');
const NUMBER = /^[+-]?(\d+[.,]?\d*|[.,]\d+)([eE][+-]?\d+)?$/;

/** The text of a header field, without the padding. Some writers pad with zero bytes. */
export function fieldText(header: Uint8Array, offset: number, width: number): string {
  const text = latin1.decode(header.subarray(offset, offset + width));
  const end = text.indexOf('\0');
  return (end < 0 ? text : text.slice(0, end)).trim();
}

/**
 * The number in a header field, or null where there is none. A decimal comma, which some writers
 * leave, is read as the point it stands for.
 */
export function fieldNumber(header: Uint8Array, offset: number, width: number): number | null {
  const text = fieldText(header, offset, width);
  if (!NUMBER.test(text)) return null;
  const value = Number(text.replace(',', '.'));
  return Number.isFinite(value) ? value : null;
}

/** The whole number in a header field within limits, or an error that names the field. */
export function fieldInteger(
  header: Uint8Array,
  field: { name: string; offset: number; width: number; least: number; most: number },
): number {
  const value = fieldNumber(header, field.offset, field.width);
  if (value === null || !Number.isInteger(value) || value < field.least || value > field.most) {
    const found = JSON.stringify(fieldText(header, field.offset, field.width));
    throw new EdfError(
      'header-number',
      field.offset,
      `the header field "${field.name}" holds ${found} instead of a whole number from ` +
        `${field.least} to ${field.most}`,
    );
  }
  return value;
}
