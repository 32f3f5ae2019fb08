import type { Tail } from '../plan';

/** 0 two-sided, 1 for A greater, -1 for B greater. */
export function tailSign(tail: Tail): -1 | 0 | 1 {
  return tail === 'two-sided' ? 0 : tail === 'a-greater' ? 1 : -1;
}

/** Signs of z that a claim may have under a tail. */
export function tailSigns(tail: Tail): (-1 | 1)[] {
  const sign = tailSign(tail);
  return sign === 0 ? [1, -1] : [sign];
}

/** What the maximum is taken over: |z|, z or -z. */
export function tailStatistic(z: number, tail: Tail): number {
  const sign = tailSign(tail);
  return sign === 0 ? Math.abs(z) : sign * z;
}

/** Surrogates at least as extreme on the tail's side; on the nearer side for two-sided. */
export function tailExceedances(upper: number, lower: number, tail: Tail): number {
  return tail === 'two-sided' ? Math.min(upper, lower) : tail === 'a-greater' ? upper : lower;
}
