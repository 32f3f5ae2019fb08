import type { ResultAxes } from '$lib/model/result';

/** What every figure of the page shows: one pair, one point, one correction. */
export interface View {
  pair: number;
  /** f * timeCount + t. */
  point: number;
  correction: string;
  /** What the matrix and the head show of each pair: its own peak, or the chosen point. */
  across: 'peaks' | 'point';
}

export interface ViewContext {
  axes: ResultAxes;
  /** The corrections that the plan names, the claim's first. */
  corrections: readonly string[];
  /** What to show when nothing is chosen. */
  fallback: { pair: number; point: number };
}

export function pairName(axes: ResultAxes, pair: number, joint = ' – '): string {
  const [j, k] = axes.pairs[pair] ?? [];
  if (j === undefined || k === undefined) return '';
  return `${axes.sites[j]}${joint}${axes.sites[k]}`;
}

/**
 * Reads `?pair=C3,P4&hz=10&s=0.36&correction=cluster-mass&across=point`. Whatever is absent or
 * fits no axis falls back, so that an old or mistyped link still shows the result.
 */
export function readView(search: string, context: ViewContext): View {
  const query = new URLSearchParams(search);
  const { axes, corrections, fallback } = context;
  const wanted = query.get('pair');
  const found = wanted ? axes.pairs.findIndex((_, i) => pairName(axes, i, ',') === wanted) : -1;
  const pair = found >= 0 ? found : fallback.pair;
  const hz = number(query.get('hz'));
  const s = number(query.get('s'));
  const point =
    hz === null || s === null
      ? fallback.point
      : nearest(axes.frequenciesHz, hz) * axes.timesS.length + nearest(axes.timesS, s);
  const correction = query.get('correction');
  return {
    pair,
    point,
    correction: correction && corrections.includes(correction) ? correction : corrections[0]!,
    across: query.get('across') === 'point' ? 'point' : 'peaks',
  };
}

/** The query that readView turns back into the same view; other parameters stay. */
export function writeView(
  search: string,
  view: View,
  { axes, corrections }: Pick<ViewContext, 'axes' | 'corrections'>,
): string {
  const next = new URLSearchParams(search);
  const timeCount = axes.timesS.length;
  next.set('pair', pairName(axes, view.pair, ','));
  next.set('hz', short(axes.frequenciesHz[Math.floor(view.point / timeCount)]!));
  next.set('s', short(axes.timesS[view.point % timeCount]!));
  setOrDrop(next, 'correction', view.correction, corrections[0]!);
  setOrDrop(next, 'across', view.across, 'peaks');
  return next.toString();
}

function setOrDrop(query: URLSearchParams, name: string, value: string, usual: string) {
  if (value === usual) query.delete(name);
  else query.set(name, value);
}

/** Enough digits to find the same grid point again, and no more. */
function short(value: number): string {
  return Number(value.toPrecision(6)).toString();
}

function number(text: string | null): number | null {
  if (text === null || text.trim() === '') return null;
  const value = Number(text);
  return Number.isFinite(value) ? value : null;
}

function nearest(values: readonly number[], wanted: number): number {
  let best = 0;
  values.forEach((value, i) => {
    if (Math.abs(value - wanted) < Math.abs(values[best]! - wanted)) best = i;
  });
  return best;
}
