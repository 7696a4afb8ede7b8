/** Number and date words used alike on screen, paper and in mail. Locale is fixed so that all agree. */

const noBreak = '\u00a0';

/** Rounded to `decimals`, with thousands separators: 12,470.5 */
export function formatNumber(value: number, decimals = 0): string {
  return value.toLocaleString('en-US', { minimumFractionDigits: decimals, maximumFractionDigits: decimals });
}

/** A value with its unit, or "Not evaluated": 1,250 A. */
export function formatQuantity(value: number | null, unit: string, decimals = 0): string {
  if (value === null) return 'Not evaluated';
  const separator = unit === '%' || unit === '' ? (unit === '%' ? noBreak : '') : noBreak;
  return `${formatNumber(value, decimals)}${separator}${unit}`;
}

/**
 * Decimals with which a value can be told from its limit, so that 87.51 never prints as "87.5, outside":
 * starts at `fewest` and adds digits until both print differently (at most 6), unless they are equal.
 */
export function decimalsToTellApart(value: number, limit: number, fewest = 1): number {
  if (value === limit) return fewest;
  let decimals = fewest;
  while (decimals < 6 && formatNumber(value, decimals) === formatNumber(limit, decimals)) decimals += 1;
  return decimals;
}

const months = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
];

/** A local date YYYY-MM-DD as "14 March 2026". */
export function formatDate(date: string): string {
  const [year, month, day] = date.split('-').map(Number);
  return `${day} ${months[(month ?? 1) - 1]} ${year}`;
}

/** An instant in the utility's zone as "14 March 2026, 09:05 EST" (date, time and zone). */
export function formatInstant(instant: string, timeZone: string): string {
  const parts = new Intl.DateTimeFormat('en-US', {
    timeZone,
    day: 'numeric',
    month: 'long',
    year: 'numeric',
    hour: '2-digit',
    hourCycle: 'h23',
    minute: '2-digit',
    timeZoneName: 'short',
  }).formatToParts(new Date(instant));
  const part = (type: string) => parts.find((candidate) => candidate.type === type)?.value ?? '';
  return `${part('day')} ${part('month')} ${part('year')}, ${part('hour')}:${part('minute')} ${part('timeZoneName')}`;
}

/** Bytes for a reader: 1.4 MB (decimal megabytes are not used; 20 MB means 20 × 1024 × 1024 here). */
export function formatBytes(bytes: number): string {
  if (bytes < 1024) return `${bytes}${noBreak}bytes`;
  if (bytes < 1024 * 1024) return `${formatNumber(bytes / 1024, 0)}${noBreak}kB`;
  return `${formatNumber(bytes / (1024 * 1024), 1)}${noBreak}MB`;
}
