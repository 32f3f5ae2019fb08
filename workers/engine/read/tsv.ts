import { SidecarError } from './sidecar-error';

/** One row of a table; missing values ("n/a" or empty) are null. */
export interface TsvRow {
  line: number;
  value(column: string): string | null;
}

export interface TsvTable {
  file: string;
  columns: string[];
  rows: TsvRow[];
}

const MOST_BYTES = 64 * 1024 * 1024;

/**
 * Reads a table as BIDS 1.11.1 defines it: UTF-8, a header line, tabs, n/a for missing values,
 * values with tabs in double quotes. A byte-order mark and Windows line ends are accepted.
 * @throws SidecarError naming file, line, column, value and remedy.
 */
export function parseTsv(file: string, bytes: Uint8Array, required: string[]): TsvTable {
  const lines = decode(file, bytes).split(/\r\n|\n|\r/);
  while (lines.length > 0 && lines[lines.length - 1].trim() === '') lines.pop();
  if (lines.length === 0) {
    throw new SidecarError(
      file,
      1,
      null,
      null,
      'the file is empty',
      'Give a header line and rows.',
    );
  }
  const columns = splitLine(lines[0]);
  checkColumns(file, columns, required);
  const places = new Map(columns.map((column, i) => [column, i]));
  const rows: TsvRow[] = [];
  for (let i = 1; i < lines.length; i++) {
    const cells = splitLine(lines[i]);
    if (cells.length !== columns.length) {
      throw new SidecarError(
        file,
        i + 1,
        null,
        null,
        `the line has ${cells.length} values, and the header names ${columns.length} columns`,
        'Separate values by one tab each, and write n/a for missing ones.',
      );
    }
    rows.push({
      line: i + 1,
      value(column) {
        const cell = cells[places.get(column) ?? -1];
        return cell === undefined || cell === '' || cell === 'n/a' ? null : cell;
      },
    });
  }
  return { file, columns, rows };
}

/** The number in a row's column, or null for n/a. */
export function numberIn(table: TsvTable, row: TsvRow, column: string): number | null {
  const text = row.value(column);
  if (text === null) return null;
  const value = Number(text);
  if (!/^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?$/.test(text) || !Number.isFinite(value)) {
    const problem = 'is not a number';
    const remedy = 'Write digits with a decimal point, or n/a.';
    throw new SidecarError(table.file, row.line, column, text, problem, remedy);
  }
  return value;
}

/** The text in a row's column, which must not be missing. */
export function textIn(table: TsvTable, row: TsvRow, column: string): string {
  const text = row.value(column);
  if (text === null) {
    const remedy = 'Give every row a value here.';
    throw new SidecarError(
      table.file,
      row.line,
      column,
      'n/a',
      'stands where a value must',
      remedy,
    );
  }
  return text;
}

function decode(file: string, bytes: Uint8Array): string {
  if (bytes.length > MOST_BYTES) {
    const problem = `the file has ${bytes.length} bytes, and at most ${MOST_BYTES} are read`;
    throw new SidecarError(file, 1, null, null, problem, 'Is it the right file?');
  }
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    const line = firstBadLine(bytes);
    throw new SidecarError(file, line, null, null, 'the text is not UTF-8', 'Save it as UTF-8.');
  }
}

function firstBadLine(bytes: Uint8Array): number {
  let line = 1;
  let start = 0;
  for (let i = 0; i <= bytes.length; i++) {
    if (i < bytes.length && bytes[i] !== 0x0a) continue;
    try {
      new TextDecoder('utf-8', { fatal: true }).decode(bytes.subarray(start, i));
    } catch {
      return line;
    }
    line++;
    start = i + 1;
  }
  return line;
}

function checkColumns(file: string, columns: string[], required: string[]): void {
  columns.forEach((column, i) => {
    if (column === '' || columns.indexOf(column) !== i) {
      const problem = column === '' ? `column ${i + 1} has no name` : 'names a second column';
      const remedy = 'Give each column a name of its own.';
      throw new SidecarError(file, 1, column || null, column || null, problem, remedy);
    }
  });
  for (const column of required) {
    if (columns.includes(column)) continue;
    const problem = `the required column "${column}" is missing; found: ${columns.join(', ')}`;
    const remedy = 'Add it to the header line, with tabs between columns.';
    throw new SidecarError(file, 1, column, null, problem, remedy);
  }
}

function splitLine(line: string): string[] {
  if (!line.includes('"')) return line.split('\t').map((cell) => cell.trim());
  const cells: string[] = [];
  // A quoted value may hold tabs, and a doubled quote stands for one. Each match takes its tab.
  const pattern = /\t(?:"((?:[^"]|"")*)"(?=\t|$)|([^\t]*))/g;
  for (const match of `\t${line}`.matchAll(pattern)) {
    cells.push((match[1]?.replaceAll('""', '"') ?? match[2]).trim());
  }
  return cells;
}
