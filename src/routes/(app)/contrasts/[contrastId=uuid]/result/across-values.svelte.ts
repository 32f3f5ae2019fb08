import type { PairValues } from '$lib/model/result';
import { Fetched } from '$lib/result/fetched.svelte';
import type { Selection } from '$lib/result/selection.svelte';
import type { PageData } from './$types';

type Result = NonNullable<PageData['result']>;

/** What the matrix and the head show of each pair: its own peak, or all pairs at one point. */
export interface AcrossValues {
  readonly values: PairValues;
  readonly fetched: Fetched<PairValues>;
}

export function acrossValues(result: () => Result, selection: () => Selection): AcrossValues {
  const fetched = new Fetched<PairValues>(async (key, signal) => {
    const { run, correction } = result();
    const point = key.split('/')[1]!;
    const url = `/api/runs/${run.id}/pairs?correction=${correction}&point=${point}`;
    const response = await fetch(url, { signal });
    if (!response.ok) throw new Error(`The server answered ${response.status}.`);
    const sent = (await response.json()) as Record<'z' | 'adjustedP' | 'point', number[]>;
    return {
      z: Float32Array.from(sent.z),
      adjustedP: Float32Array.from(sent.adjustedP),
      point: Int32Array.from(sent.point),
    };
  });
  $effect(() => {
    const { across, point } = selection();
    if (across === 'point') fetched.want(`${result().correction}/${point}`);
  });
  return {
    fetched,
    get values() {
      const useful = selection().across === 'point' ? fetched.value : null;
      return useful ?? result().peaks;
    },
  };
}
