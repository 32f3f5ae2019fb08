import { correctionOf, measureOf, type CorrectionId, type MeasureId } from '$engine';
import type { ResultAxes, ResultEdge } from '$lib/model/result';
import type { FoundRun } from './find-run';
import { edgeColumns } from './edge-columns';

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

/** UTF-8 text, one line an edge, tab-separated, the first line the column names. */
export function edgesTsv(
  edges: readonly ResultEdge[],
  axes: ResultAxes,
  measure: MeasureId,
): string {
  const columns = edgeColumns(measure);
  const lines = [columns.map((column) => column.name)];
  for (const edge of edges) {
    lines.push(columns.map((column) => tsvCell(column.value(edge, axes))));
  }
  return lines.map((cells) => `${cells.join('\t')}\n`).join('');
}

/** What must be known of a claim wherever its numbers go. */
export function exportCautions(correction: CorrectionId, measure: MeasureId): string[] {
  const { sentence, caution } = correctionOf(correction);
  const ofMeasure = measureOf(measure).caution;
  return [
    caution ?? sentence,
    ...(ofMeasure === null ? [] : [ofMeasure]),
    'Sites can share sources and a reference (volume conduction): edges with a preferred lag near zero or half a turn have a simpler explanation than synchrony.',
    'For research. Not a medical device, and no basis for a diagnosis; local ethics and data rules apply.',
  ];
}

/** The sidecar of edgesTsv: what each column means, and what the claim rests on. */
export function edgesJson(found: FoundRun, correction: CorrectionId, edgeCount: number): object {
  const { run, plan, contrast } = found;
  const { test } = plan.body;
  const columns = edgeColumns(plan.body.measure).map(({ name, description, units }) => [
    name,
    { Description: description, ...(units ? { Units: units } : {}) },
  ]);
  return {
    Contrast: contrast.name,
    Simulated: contrast.simulated,
    A: plan.body.a.name,
    B: plan.body.b.name,
    Participant: plan.body.participant,
    EpochsA: run.epochsA,
    EpochsB: run.epochsB,
    PlanVersion: plan.version,
    PlanHash: plan.hash,
    PlanLockedAt: plan.lockedAt.toISOString(),
    ReasonForChange: plan.reason,
    Null: plan.body.null,
    Measure: plan.body.measure,
    Tail: test.tail,
    Alpha: test.alpha,
    Permutations: test.permutations,
    Correction: correction,
    CorrectionsPlanned: test.corrections,
    Edges: edgeCount,
    Seed: run.seed,
    EngineVersion: run.engineVersion,
    Digest: run.digest,
    FinishedAt: run.finishedAt.toISOString(),
    MissingValue: 'n/a',
    Cautions: exportCautions(correction, plan.body.measure),
    Columns: Object.fromEntries(columns),
  };
}
