import {
  createTable,
  getCoreRowModel,
  getFilteredRowModel,
  getSortedRowModel,
  type ColumnDef,
  type SortingState,
} from '@tanstack/table-core';
import type { ResultAxes, ResultEdge } from '$lib/model/result';
import { claimedLagRad, lagMs } from '$lib/result/zero-lag';

export interface EdgeFilter {
  /** Parts of site names, all of which must occur in the pair. */
  text: string;
  sign: 'both' | 'a' | 'b';
}

export type ColumnId =
  | 'pair'
  | 'band'
  | 'time'
  | 'observedA'
  | 'observedB'
  | 'difference'
  | 'z'
  | 'p'
  | 'adjustedP'
  | 'lag'
  | 'cluster';

/** Ties of p are kept apart by the strength of the edge. */
const byP = (one: ResultEdge, other: ResultEdge, of: 'p' | 'adjustedP') =>
  one[of] - other[of] || Math.abs(other.z) - Math.abs(one.z);

function columns(axes: ResultAxes): ColumnDef<ResultEdge>[] {
  const site = (index: number) => axes.sites[index]!;
  const numeric = (id: ColumnId, value: (edge: ResultEdge) => number): ColumnDef<ResultEdge> => ({
    id,
    accessorFn: value,
    sortingFn: (one, other) => value(one.original) - value(other.original),
  });
  return [
    {
      id: 'pair',
      accessorFn: (edge) => axes.pairs[edge.pair]!.map(site).join(' '),
      sortingFn: (one, other) => one.original.pair - other.original.pair,
      filterFn: (row, id, text: string) => {
        const names = row.getValue<string>(id).toLowerCase().split(' ');
        const parts = text.toLowerCase().split(/[\s,–-]+/);
        return parts.every((part) => names.some((name) => name.includes(part)));
      },
    },
    numeric('band', (edge) => edge.fromHz),
    numeric('time', (edge) => edge.fromS),
    numeric('observedA', (edge) => edge.observedA),
    numeric('observedB', (edge) => edge.observedB),
    {
      ...numeric('difference', (edge) => edge.difference),
      filterFn: (row, _, sign: 'a' | 'b') => row.original.z > 0 === (sign === 'a'),
    },
    numeric('z', (edge) => edge.z),
    {
      id: 'p',
      accessorFn: (edge) => edge.p,
      sortingFn: (a, b) => byP(a.original, b.original, 'p'),
    },
    {
      id: 'adjustedP',
      accessorFn: (edge) => edge.adjustedP,
      sortingFn: (a, b) => byP(a.original, b.original, 'adjustedP'),
    },
    numeric('lag', (edge) => Math.abs(lagMs(claimedLagRad(edge), edge.peakHz))),
    numeric('cluster', (edge) => edge.cluster ?? Number.MAX_SAFE_INTEGER),
  ];
}

/** The edges that pass the filter, in the order asked for. */
export function edgeRows(
  edges: ResultEdge[],
  axes: ResultAxes,
  sorting: SortingState,
  filter: EdgeFilter,
): ResultEdge[] {
  const columnFilters = [
    ...(filter.text.trim() ? [{ id: 'pair', value: filter.text.trim() }] : []),
    ...(filter.sign === 'both' ? [] : [{ id: 'difference', value: filter.sign }]),
  ];
  const table = createTable<ResultEdge>({
    data: edges,
    columns: columns(axes),
    state: {
      sorting,
      columnFilters,
      columnPinning: {},
      globalFilter: undefined,
    },
    onStateChange: () => undefined,
    renderFallbackValue: null,
    getCoreRowModel: getCoreRowModel(),
    getSortedRowModel: getSortedRowModel(),
    getFilteredRowModel: getFilteredRowModel(),
  });
  return table.getRowModel().rows.map((row) => row.original);
}
