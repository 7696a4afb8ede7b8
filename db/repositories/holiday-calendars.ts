import type { Database } from '../connection.ts';

export interface HolidayCalendar {
  id: number;
  code: string;
  number: number;
  /** Local dates, YYYY-MM-DD. */
  days: string[];
}

interface CalendarRow extends Omit<HolidayCalendar, 'days'> {
  days: string;
}

function selectCalendars(db: Database) {
  return db('holiday_calendars').select<CalendarRow[]>('id', 'code', 'number', 'days');
}

function toCalendar(row: CalendarRow): HolidayCalendar {
  return { ...row, days: JSON.parse(row.days) as string[] };
}

/** The one that new clocks run on: published last. */
export async function findNewestCalendar(db: Database): Promise<HolidayCalendar | undefined> {
  const [row] = await selectCalendars(db)
    .orderBy([
      { column: 'published_at', order: 'desc' },
      { column: 'id', order: 'desc' },
    ])
    .limit(1);
  return row && toCalendar(row);
}

export async function listCalendars(db: Database, ids: readonly number[]): Promise<HolidayCalendar[]> {
  return (await selectCalendars(db).whereIn('id', ids)).map(toCalendar);
}
