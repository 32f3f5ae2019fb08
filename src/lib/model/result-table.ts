import { correctionOf, measureOf, nullCaution, type CorrectionId, type Plan } from '$engine';
import type { ResultAxes } from './result';

/** A column of an exported table of a result; the table's sidecar describes it by its name. */
export interface TableColumn<Row> {
  name: string;
  description: string;
  /** SI or accepted unit; absent for labels, counts and ratios. */
  units?: string;
  value(row: Row, axes: ResultAxes): string | number | null;
}

/**
 * A cell of the table. Numbers keep every digit they have, with a dot; what is absent is n/a.
 * A text that a spreadsheet would take for a formula is led by an apostrophe, and characters that
 * end a cell or a line become spaces.
 */
export function tsvCell(value: string | number | null): string {
  if (value === null || (typeof value === 'number' && !Number.isFinite(value))) return 'n/a';
  if (typeof value === 'number') return String(value);
  const flat = value.replace(/[\t\r\n]+/g, ' ');
  return /^[=+\-@]/.test(flat.trimStart()) ? `'${flat}` : flat;
}

/** UTF-8 text, one line a row, tab-separated, the first line the column names. */
export function tsvTable<Row>(
  columns: readonly TableColumn<Row>[],
  rows: readonly Row[],
  axes: ResultAxes,
): string {
  const lines = [columns.map((column) => column.name)];
  for (const row of rows) lines.push(columns.map((column) => tsvCell(column.value(row, axes))));
  return lines.map((cells) => `${cells.join('\t')}\n`).join('');
}

/** The columns as a sidecar describes them. */
export function describedColumns<Row>(columns: readonly TableColumn<Row>[]): object {
  return Object.fromEntries(
    columns.map(({ name, description, units }) => [
      name,
      { Description: description, ...(units ? { Units: units } : {}) },
    ]),
  );
}

/** What must be known of a claim wherever its numbers go. */
export function exportCautions(
  correction: CorrectionId,
  plan: Pick<Plan, 'measure' | 'null'>,
): string[] {
  const { sentence, caution } = correctionOf(correction);
  const ofMeasure = measureOf(plan.measure).caution;
  const ofNull = nullCaution(plan.null);
  return [
    caution ?? sentence,
    ...(ofMeasure === null ? [] : [ofMeasure]),
    ...(ofNull === null ? [] : [ofNull]),
    'Sites can share sources and a reference (volume conduction): edges with a preferred lag near zero or half a turn have a simpler explanation than synchrony.',
    'For research. Not a medical device, and no basis for a diagnosis; local ethics and data rules apply.',
  ];
}
