import { planDraftSchema, type PlanDraft } from '$lib/model/plan-draft';

/** Changes that the server could not be told of, kept in this browser until it can. */
export interface KeptDraft {
  draft: PlanDraft;
  /** The server's revision that the changes are based on. */
  basedOn: number;
  keptAt: string;
}

const keyOf = (contrastId: string, version: number) => `nullwright-draft/${contrastId}/${version}`;

/** False when the browser keeps nothing (private windows, full storage). */
export function keepDraft(
  contrastId: string,
  version: number,
  draft: PlanDraft,
  basedOn: number,
): boolean {
  const kept: KeptDraft = { draft, basedOn, keptAt: new Date().toISOString() };
  try {
    localStorage.setItem(keyOf(contrastId, version), JSON.stringify(kept));
    return true;
  } catch {
    return false;
  }
}

export function keptDraft(contrastId: string, version: number): KeptDraft | null {
  try {
    const text = localStorage.getItem(keyOf(contrastId, version));
    if (!text) return null;
    const { draft, basedOn, keptAt } = JSON.parse(text) as KeptDraft;
    const parsed = planDraftSchema.safeParse(draft);
    return parsed.success ? { draft: parsed.data, basedOn: Number(basedOn), keptAt } : null;
  } catch {
    return null;
  }
}

export function forgetKept(contrastId: string, version: number): void {
  try {
    localStorage.removeItem(keyOf(contrastId, version));
  } catch {
    // Storage that cannot be written holds nothing to forget.
  }
}
