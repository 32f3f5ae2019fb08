// Numbers and times as people read them: true minus, thousands apart, units with a space.
// Fixed locale and UTC, so that server and browser render the same text.

const locale = 'en-GB';
const absent = '–';
const trueMinus = (text: string): string => text.replace('-', '−');

/** `digits` decimals, thousands apart; "–" for what is no finite number. */
export function formatNumber(value: number | null | undefined, digits = 0): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return absent;
  return trueMinus(
    value.toLocaleString(locale, {
      minimumFractionDigits: digits,
      maximumFractionDigits: digits,
      signDisplay: 'negative',
    }),
  );
}

/** As formatNumber, with an explicit plus: for differences. */
export function formatSigned(value: number | null | undefined, digits = 0): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return absent;
  return trueMinus(
    value.toLocaleString(locale, {
      minimumFractionDigits: digits,
      maximumFractionDigits: digits,
      signDisplay: 'exceptZero',
    }),
  );
}

/**
 * Four decimals; two significant digits below 0.0001. A permutation p is never 0
 * (b + 1 over m + 1), so no value is rounded to it.
 */
export function formatP(p: number | null | undefined): string {
  if (p === null || p === undefined || !Number.isFinite(p)) return absent;
  // Only an interval's end can be 0 exactly.
  if (p === 0) return '0';
  if (p >= 0.0001) return formatNumber(p, 4);
  return p.toLocaleString(locale, { maximumSignificantDigits: 2, maximumFractionDigits: 20 });
}

/** "5,000", or with a noun "1 edge", "7 edges". */
export function formatCount(
  count: number | null | undefined,
  singular?: string,
  plural = `${singular}s`,
): string {
  const text = formatNumber(count, 0);
  if (!singular) return text;
  return `${text} ${count === 1 ? singular : plural}`;
}

/** "37 ms", "0.37 s" as asked by `digits`, "41 s", "3 min 20 s", "2 h 5 min". */
export function formatSeconds(seconds: number | null | undefined, digits?: number): string {
  if (seconds === null || seconds === undefined || !Number.isFinite(seconds)) return absent;
  if (digits !== undefined) return `${formatNumber(seconds, digits)} s`;
  const size = Math.abs(seconds);
  if (size > 0 && size < 0.1) return `${formatNumber(seconds * 1000, size < 0.01 ? 1 : 0)} ms`;
  if (size < 10) return `${trueMinus(String(Number(seconds.toFixed(2))))} s`;
  if (Math.round(size) < 60) return `${formatNumber(seconds, 0)} s`;
  const sign = seconds < 0 ? '−' : '';
  const whole = Math.round(size);
  const minutes = Math.floor(whole / 60);
  if (minutes < 60) return `${sign}${minutes} min${whole % 60 ? ` ${whole % 60} s` : ''}`;
  const left = minutes % 60;
  return `${sign}${formatNumber(Math.floor(minutes / 60))} h${left ? ` ${left} min` : ''}`;
}

/** Decimal units, as file systems and networks state them: "812 B", "2.6 MB", "1.9 GB". */
export function formatBytes(bytes: number | null | undefined): string {
  if (bytes === null || bytes === undefined || !Number.isFinite(bytes)) return absent;
  const units = ['B', 'kB', 'MB', 'GB', 'TB'];
  let size = bytes;
  let unit = 0;
  while (size >= 999.5 && unit < units.length - 1) {
    size /= 1000;
    unit += 1;
  }
  return `${formatNumber(size, unit > 0 && size < 9.95 ? 1 : 0)} ${units[unit]}`;
}

/** "24 Nov 2026", in UTC. */
export function formatDate(date: Date | string | null | undefined): string {
  const parsed = toDate(date);
  if (!parsed) return absent;
  return parsed.toLocaleDateString(locale, {
    day: 'numeric',
    month: 'short',
    year: 'numeric',
    timeZone: 'UTC',
  });
}

/** "24 Nov 2026, 14:05 UTC". */
export function formatDateTime(date: Date | string | null | undefined): string {
  const parsed = toDate(date);
  if (!parsed) return absent;
  const time = parsed.toLocaleTimeString(locale, {
    hour: '2-digit',
    minute: '2-digit',
    timeZone: 'UTC',
  });
  return `${formatDate(parsed)}, ${time} UTC`;
}

function toDate(date: Date | string | null | undefined): Date | null {
  if (date === null || date === undefined) return null;
  const parsed = typeof date === 'string' ? new Date(date) : date;
  return Number.isNaN(parsed.getTime()) ? null : parsed;
}
