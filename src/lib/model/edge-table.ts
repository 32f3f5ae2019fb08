import type { CorrectionId, MeasureId, Plan } from '$engine';
import { edgeColumns } from './edge-columns';
import type { ResultAxes, ResultEdge } from './result';
import { describedColumns, exportCautions, tsvTable } from './result-table';

export const edgesTsv = (
  edges: readonly ResultEdge[],
  axes: ResultAxes,
  measure: MeasureId,
): string => tsvTable(edgeColumns(measure), edges, axes);

/** Smallest adjusted p first, then the strongest: the order of every list of edges. */
export function byClaim(one: ResultEdge, other: ResultEdge): number {
  return one.adjustedP - other.adjustedP || Math.abs(other.z) - Math.abs(one.z);
}

/** What a sidecar states of the run behind a table. */
export interface TableOrigin {
  plan: Plan;
  planHash: string;
  epochsA: number;
  epochsB: number;
  seed: string;
  engineVersion: string;
  digest: string;
  finishedAt: Date;
}

/** The sidecar of edgesTsv: what each column means, and what the claim rests on. */
export function edgesSidecar(
  origin: TableOrigin,
  correction: CorrectionId,
  edgeCount: number,
): Record<string, unknown> {
  return {
    ...originFields(origin),
    Correction: correction,
    CorrectionsPlanned: origin.plan.test.corrections,
    Edges: edgeCount,
    MissingValue: 'n/a',
    Cautions: exportCautions(correction, origin.plan),
    Columns: describedColumns(edgeColumns(origin.plan.measure)),
  };
}

export function originFields(origin: TableOrigin): Record<string, unknown> {
  const { plan } = origin;
  const { test } = plan;
  return {
    A: plan.a.name,
    B: plan.b.name,
    Participant: plan.participant,
    EpochsA: origin.epochsA,
    EpochsB: origin.epochsB,
    PlanHash: origin.planHash,
    Null: plan.null,
    Measure: plan.measure,
    Tail: test.tail,
    Alpha: test.alpha,
    Permutations: test.permutations,
    Seed: origin.seed,
    EngineVersion: origin.engineVersion,
    Digest: origin.digest,
    FinishedAt: origin.finishedAt.toISOString(),
  };
}
