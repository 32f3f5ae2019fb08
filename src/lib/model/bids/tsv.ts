/** A sidecar that cannot be used; the message names the file, the line, the value and the remedy. */
export class SidecarError extends Error {
  override name = 'SidecarError';
}

export interface TsvTable {
  columns: string[];
  /** Cells by column name, with the line number in the file, counted from 1. */
  rows: { line: number; cells: Record<string, string> }[];
}

/**
 * Reads a tab-separated table with a header line, as the BIDS standard defines its sidecars
 * (UTF-8, tabs, one header line, "n/a" for a missing value). Throws SidecarError.
 */
export function readTsv(fileName: string, text: string, required: string[]): TsvTable {
  const lines = text.replace(/^\uFEFF/, '').split(/\r\n|\n|\r/);
  const columns = (lines[0] ?? '').split('\t').map((name) => name.trim());
  const missing = required.filter((name) => !columns.includes(name));
  if (missing.length > 0) {
    throw new SidecarError(
      `${fileName}: the first line must name the column${missing.length > 1 ? 's' : ''} ` +
        `${missing.join(', ')}, separated by tabs. It reads "${shortened(lines[0] ?? '')}".`,
    );
  }
  const repeated = columns.find((name, i) => columns.indexOf(name) !== i);
  if (repeated !== undefined) {
    throw new SidecarError(`${fileName}: the column ${repeated} occurs twice. Keep one of them.`);
  }
  const rows: TsvTable['rows'] = [];
  lines.forEach((line, i) => {
    if (i === 0 || line.trim() === '') return;
    const cells = line.split('\t').map((cell) => cell.trim());
    if (cells.length !== columns.length) {
      throw new SidecarError(
        `${fileName}, line ${i + 1}: has ${cells.length} cells where the header has ` +
          `${columns.length}. Separate the cells by single tabs.`,
      );
    }
    const named = Object.fromEntries(columns.map((name, c) => [name, cells[c]!]));
    rows.push({ line: i + 1, cells: named });
  });
  return { columns, rows };
}

/** The cell's text, or null where the table says that there is none. */
export function valueOf(cell: string | undefined): string | null {
  return cell === undefined || cell === '' || cell.toLowerCase() === 'n/a' ? null : cell;
}

export function numberIn(fileName: string, line: number, column: string, cell: string): number {
  const value = Number(cell);
  if (cell === '' || !Number.isFinite(value)) {
    throw new SidecarError(
      `${fileName}, line ${line}: ${column} is "${shortened(cell)}", which is no number.`,
    );
  }
  return value;
}

function shortened(text: string): string {
  return text.length > 80 ? `${text.slice(0, 77)}...` : text;
}
