import { formatCount } from '$lib/model/format';

/** Event labels with their counts, in the order of the alphabet. */
export function labelCounts(
  events: readonly { label: string }[],
): { value: string; label: string; detail: string }[] {
  const counts = new Map<string, number>();
  for (const { label } of events) counts.set(label, (counts.get(label) ?? 0) + 1);
  return [...counts]
    .sort(([x], [y]) => x.localeCompare(y, 'en'))
    .map(([label, count]) => ({ value: label, label, detail: formatCount(count) }));
}
