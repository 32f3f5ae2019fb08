/** Steps from zero to the limit on either side: finer than an eye tells apart in one figure. */
export const levelCount = 16;

/**
 * The step of a diverging scale a value falls on: −levelCount (B) to levelCount (A), 0 the sheet.
 * Values beyond ±limit take the last step.
 */
export function divergingLevel(value: number, limit: number): number {
  if (!(limit > 0) || !Number.isFinite(value)) return 0;
  const share = Math.max(-1, Math.min(1, value / limit));
  return Math.round(share * levelCount);
}

/** The CSS colour of a step; mixed by the browser, so that it follows the theme and the printer. */
export function divergingFill(level: number): string {
  if (level === 0) return 'var(--zero)';
  const hue = level > 0 ? 'var(--a)' : 'var(--b)';
  const percent = Math.round((Math.abs(level) / levelCount) * 100);
  return `color-mix(in oklab, ${hue} ${percent}%, var(--zero))`;
}

const pShares = [1 / 50, 1 / 5, 1] as const;

/**
 * The step of an adjusted p on the scale sheet to ink: 0 above 0.1, 1 to 0.1, 2 passes, 3 and 4
 * to a fifth and a fiftieth of alpha. Small p is dark: it is what the eye should find.
 */
export function pLevel(p: number, alpha: number): number {
  if (!Number.isFinite(p)) return 0;
  const bounds = [...pShares.map((share) => alpha * share), Math.max(0.1, alpha)];
  // Maps hold p in single precision, where 0.05 lies a hair above itself.
  return bounds.filter((bound) => p <= bound * (1 + 1e-6)).length;
}

export function pFill(level: number): string {
  const percents = [0, 14, 45, 70, 100];
  return `color-mix(in oklab, var(--ink) ${percents[level] ?? 0}%, var(--zero))`;
}

/** The steps and what each means, for the legend. */
export function pLegend(alpha: number): { level: number; text: string }[] {
  const bound = (share: number) => Number((alpha * share).toPrecision(2)).toString();
  return [
    { level: 0, text: 'above 0.1' },
    { level: 1, text: 'to 0.1' },
    { level: 2, text: `to ${bound(pShares[2])}` },
    { level: 3, text: `to ${bound(pShares[1])}` },
    { level: 4, text: `to ${bound(pShares[0])}` },
  ];
}
