import type { Plan } from '$engine';

/** What the maximum statistic is taken over, as it is written in labels. */
export function tailSymbol(tail: Plan['test']['tail']): string {
  return tail === 'two-sided' ? '|z|' : tail === 'a-greater' ? 'z' : '−z';
}
