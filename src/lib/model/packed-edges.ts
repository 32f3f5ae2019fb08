import type { ResultEdge } from './result';

const fields = [
  'pair',
  'fromHz',
  'toHz',
  'fromS',
  'toS',
  'peakHz',
  'peakS',
  'peakPoint',
  'points',
  'observedA',
  'observedB',
  'difference',
  'z',
  'p',
  'pLow',
  'pHigh',
  'adjustedP',
  'adjustedPLow',
  'adjustedPHigh',
  'lagARad',
  'lagBRad',
  'cluster',
] as const satisfies readonly (keyof ResultEdge)[];

/** Edges as one table of numbers, `values[edge * 22 + field]`: thousands travel without names. */
export type PackedEdges = Float64Array;

export function packEdges(edges: readonly ResultEdge[]): PackedEdges {
  const values = new Float64Array(edges.length * fields.length);
  edges.forEach((edge, i) => {
    fields.forEach((field, j) => {
      values[i * fields.length + j] = edge[field] ?? Number.NaN;
    });
  });
  return values;
}

/** The inverse of packEdges; NaN stands for an absent value. */
export function unpackEdges(values: PackedEdges): ResultEdge[] {
  return Array.from({ length: values.length / fields.length }, (_, i) => {
    const row = values.subarray(i * fields.length, (i + 1) * fields.length);
    const entries = fields.map((field, j) => [field, Number.isNaN(row[j]!) ? null : row[j]!]);
    return Object.fromEntries(entries) as ResultEdge;
  });
}
