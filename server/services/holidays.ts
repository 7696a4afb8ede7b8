import type { Database } from '../../db/connection.ts';
import {
  findNewestCalendar,
  listCalendars,
  type HolidayCalendar,
} from '../../db/repositories/holiday-calendars.ts';

/** The calendar that new clocks run on. */
export async function getCalendarInForce(db: Database): Promise<HolidayCalendar> {
  const calendar = await findNewestCalendar(db);
  if (calendar === undefined)
    throw new Error('No holiday calendar is published; the reference seed brings one');
  return calendar;
}

/** Holidays by the row id of their calendar: a clock keeps the calendar that it was started on. */
export async function listHolidays(
  db: Database,
  calendarIds: readonly number[],
): Promise<Map<number, ReadonlySet<string>>> {
  const calendars = await listCalendars(db, [...new Set(calendarIds)]);
  return new Map(calendars.map(({ id, days }) => [id, new Set(days)]));
}
