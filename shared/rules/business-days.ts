/*
 * Business days as the procedures count them: "Monday through Friday, excluding Federal Holidays" (20VAC5-314-20, the
 * same words as the federal pro forma). Dates are local, YYYY-MM-DD; the day of receipt is day 0.
 */

const dayMilliseconds = 86_400_000;

interface Holiday {
  /** Years before it was a holiday know nothing of it. */
  since?: number;
  date(year: number): string;
}

function toTime(date: string): number {
  if (!isLocalDate(date)) throw new RangeError(`Local date: got "${date}", expected a day as YYYY-MM-DD`);
  return Date.parse(`${date}T00:00:00Z`);
}

function toDate(time: number): string {
  return new Date(time).toISOString().slice(0, 10);
}

function shiftDays(date: string, days: number): string {
  return toDate(toTime(date) + days * dayMilliseconds);
}

/** Whether the text names a day that there is. */
export function isLocalDate(date: string): boolean {
  const time = /^\d{4}-\d{2}-\d{2}$/.test(date) ? Date.parse(`${date}T00:00:00Z`) : Number.NaN;
  // Date.parse takes 30 February for 2 March: only what comes back as it went in is a date.
  return !Number.isNaN(time) && toDate(time) === date;
}

/** The `days`-th day after `startDate`, whatever day it is: 2026-12-24 + 3 = 2026-12-27. */
export function addCalendarDays(startDate: string, days: number): string {
  return shiftDays(startDate, days);
}

/** Days after `startDate` up to and with `endDate`; 0 when the end is not after the start. */
export function countCalendarDays(startDate: string, endDate: string): number {
  return Math.max(0, (toTime(endDate) - toTime(startDate)) / dayMilliseconds);
}

/** 0 is Sunday. */
function weekday(date: string): number {
  return new Date(toTime(date)).getUTCDay();
}

function makeDate(year: number, month: number, day: number): string {
  return `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
}

const fixed =
  (month: number, day: number) =>
  (year: number): string =>
    makeDate(year, month, day);

const nth =
  (month: number, wantedWeekday: number, ordinal: number) =>
  (year: number): string => {
    const first = makeDate(year, month, 1);
    return shiftDays(first, ((wantedWeekday - weekday(first) + 7) % 7) + 7 * (ordinal - 1));
  };

function lastMondayOfMay(year: number): string {
  const last = makeDate(year, 5, 31);
  return shiftDays(last, -((weekday(last) + 6) % 7));
}

const monday = 1;
const thursday = 4;

/** 5 U.S.C. 6103(a). Inauguration Day, a holiday around Washington alone, is not among them (from memory). */
const holidays: readonly Holiday[] = [
  { date: fixed(1, 1) },
  { date: nth(1, monday, 3) },
  { date: nth(2, monday, 3) },
  { date: lastMondayOfMay },
  { since: 2021, date: fixed(6, 19) },
  { date: fixed(7, 4) },
  { date: nth(9, monday, 1) },
  { date: nth(10, monday, 2) },
  { date: fixed(11, 11) },
  { date: nth(11, thursday, 4) },
  { date: fixed(12, 25) },
];

/** 5 U.S.C. 6103: Saturday's is kept on the Friday before, Sunday's on the Monday after. */
function observe(date: string): string {
  const day = weekday(date);
  if (day === 6) return shiftDays(date, -1);
  return day === 0 ? shiftDays(date, 1) : date;
}

/**
 * The days of this calendar year on which federal holidays are kept, in order. The trap: a New Year's Day that is a
 * Saturday is kept on 31 December of the year before, so a year may hold two of them or none.
 */
export function federalHolidays(year: number): string[] {
  const kept = [year, year + 1].flatMap((holidayYear) =>
    holidays
      .filter(({ since }) => since === undefined || holidayYear >= since)
      .map(({ date }) => observe(date(holidayYear))),
  );
  return kept.filter((date) => date.startsWith(`${year}-`)).sort();
}

function isBusinessDay(date: string, holidaysKept: ReadonlySet<string>): boolean {
  const day = weekday(date);
  return day !== 0 && day !== 6 && !holidaysKept.has(date);
}

/** The `days`-th business day after `startDate`, which itself is day 0 whatever day it is: 2026-06-15 + 3 = 2026-06-18. */
export function addBusinessDays(startDate: string, days: number, holidaysKept: Iterable<string>): string {
  if (!Number.isInteger(days) || days < 0) {
    throw new RangeError(`Business days to add: got ${days}, expected a whole number of 0 or more`);
  }
  const kept = new Set(holidaysKept);
  let date = startDate;
  for (let counted = 0; counted < days;) {
    date = shiftDays(date, 1);
    if (isBusinessDay(date, kept)) counted += 1;
  }
  return date;
}

/** Business days after `startDate` up to and with `endDate`; 0 when the end is not after the start. */
export function countBusinessDays(
  startDate: string,
  endDate: string,
  holidaysKept: Iterable<string>,
): number {
  const kept = new Set(holidaysKept);
  const end = toTime(endDate);
  let counted = 0;
  for (let time = toTime(startDate) + dayMilliseconds; time <= end; time += dayMilliseconds) {
    if (isBusinessDay(toDate(time), kept)) counted += 1;
  }
  return counted;
}

/** The day that the calendar on the wall shows at this instant in the IANA zone. */
export function localDate(instant: Date, timeZone: string): string {
  const parts = new Intl.DateTimeFormat('en-US', {
    timeZone,
    calendar: 'gregory',
    year: 'numeric',
    month: '2-digit',
    day: '2-digit',
  }).formatToParts(instant);
  const part = (type: string) => parts.find((candidate) => candidate.type === type)?.value ?? '';
  return `${part('year')}-${part('month')}-${part('day')}`;
}
