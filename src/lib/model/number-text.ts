/** The shortest text that reads back as exactly this number, with a true minus. */
export function numberText(value: number): string {
  return String(value === 0 ? 0 : value).replaceAll('-', '−');
}

const decimal = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i;
const grouped = /^\d{1,3}(,\d{3})+$/;

/**
 * Reads what a person typed: "-0.2", "−0.2" with a true minus, " .5 ". NaN when it is no number.
 * A decimal comma is not guessed at: "0,2" is NaN, so that 0,200 is never taken for 200.
 */
export function readNumber(text: string): number {
  const clean = text.trim().replaceAll('−', '-');
  return decimal.test(clean) ? Number(clean) : Number.NaN;
}

/** Like readNumber, for counts: "5,000" with commas between thousands is 5000. */
export function readCount(text: string): number {
  const clean = text.trim();
  return grouped.test(clean) ? Number(clean.replaceAll(',', '')) : readNumber(clean);
}
