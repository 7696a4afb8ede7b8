import { describe, expect, it } from 'vitest';
import {
  addBusinessDays,
  addCalendarDays,
  countBusinessDays,
  countCalendarDays,
  federalHolidays,
  isLocalDate,
  localDate,
} from '../../../shared/rules/business-days.ts';

const holidays = [2026, 2027, 2028].flatMap(federalHolidays);

describe('business days', () => {
  /*
   * Rule: "Business Day: Monday through Friday, excluding Federal Holidays" (20VAC5-314-20, read) with the holidays of
   * 5 U.S.C. 6103 (read) and the convention that the day of receipt is day 0. The dates are calculated from that rule,
   * apart from this code.
   */
  it.each([
    ['2026-06-15', 3, '2026-06-18', 'a plain week'],
    ['2026-06-15', 10, '2026-06-30', 'Juneteenth within'],
    ['2026-06-30', 3, '2026-07-06', '4 July is a Saturday, Friday 3 July is kept'],
    ['2026-12-21', 10, '2027-01-06', 'Christmas and New Year within'],
    ['2026-11-20', 15, '2026-12-14', 'Thanksgiving within'],
    ['2027-06-14', 5, '2027-06-22', '19 June is a Saturday, Friday 18 June is kept'],
    ['2026-05-20', 30, '2026-07-06', 'three holidays within'],
    ['2026-08-31', 45, '2026-11-04', 'Labor Day and Columbus Day within'],
    ['2026-07-04', 3, '2026-07-08', 'received on a Saturday'],
    ['2026-10-10', 10, '2026-10-26', 'received on the Saturday before a holiday'],
  ])('counts from %s, %i days, to %s: %s', (start, days, due) => {
    expect(addBusinessDays(start, days, holidays)).toBe(due);
    expect(countBusinessDays(start, due, holidays)).toBe(days);
  });

  it('keeps a New Year that is a Saturday on 31 December of the year before', () => {
    // 1 January 2028 is a Saturday.
    expect(federalHolidays(2027)).toContain('2027-12-31');
    expect(federalHolidays(2027)).toContain('2027-01-01');
    expect(federalHolidays(2028).some((day) => day.startsWith('2028-01-0'))).toBe(false);
  });

  it('lists the eleven days of 2026 as 5 U.S.C. 6103 gives them', () => {
    expect(federalHolidays(2026)).toEqual([
      '2026-01-01',
      '2026-01-19',
      '2026-02-16',
      '2026-05-25',
      '2026-06-19',
      '2026-07-03',
      '2026-09-07',
      '2026-10-12',
      '2026-11-11',
      '2026-11-26',
      '2026-12-25',
    ]);
  });

  it('knows Juneteenth from 2021 on only', () => {
    expect(federalHolidays(2020).some((day) => day.startsWith('2020-06'))).toBe(false);
    // 19 June 2021 is a Saturday.
    expect(federalHolidays(2021)).toContain('2021-06-18');
  });

  it('takes an instant shortly before local midnight for that local day', () => {
    expect(localDate(new Date('2026-03-15T03:59:59Z'), 'America/New_York')).toBe('2026-03-14');
    expect(localDate(new Date('2026-03-15T04:00:00Z'), 'America/New_York')).toBe('2026-03-15');
    // Before daylight saving time begins (8 March 2026) midnight is an hour later.
    expect(localDate(new Date('2026-03-07T04:30:00Z'), 'America/New_York')).toBe('2026-03-06');
  });

  it('counts nothing when the end is not after the start', () => {
    expect(countBusinessDays('2026-06-15', '2026-06-15', holidays)).toBe(0);
    expect(countBusinessDays('2026-06-15', '2026-06-10', holidays)).toBe(0);
  });

  it('refuses days that no calendar has and counts that are not whole', () => {
    expect(() => addBusinessDays('2026-02-30', 1, holidays)).toThrow('got "2026-02-30"');
    expect(() => addBusinessDays('15 June 2026', 1, holidays)).toThrow('YYYY-MM-DD');
    expect(() => addBusinessDays('2026-06-15', 1.5, holidays)).toThrow('got 1.5');
  });
});

describe('calendar days', () => {
  it('are counted through weekends, holidays and the end of the year', () => {
    expect(addCalendarDays('2026-12-24', 8)).toBe('2027-01-01');
    expect(countCalendarDays('2026-12-24', '2027-01-01')).toBe(8);
    expect(countCalendarDays('2027-01-01', '2026-12-24')).toBe(0);
    // Daylight saving time begins on 8 March 2026: that day is a day like others.
    expect(countCalendarDays('2026-03-07', '2026-03-09')).toBe(2);
  });

  it('are days that the calendar has', () => {
    expect(['2028-02-29', '2026-02-29', '2026-2-9', 'soon'].map(isLocalDate)).toEqual([
      true,
      false,
      false,
      false,
    ]);
  });
});
