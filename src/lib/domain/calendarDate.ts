import { z } from 'zod';

/** A calendar date as `YYYY-MM-DD`; refuses dates that do not exist (2026-02-30). */
export const calendarDate = z
  .string()
  .trim()
  .regex(/^\d{4}-\d{2}-\d{2}$/, 'Enter the date as year, month and day')
  .refine((text) => {
    const [year, month, day] = text.split('-').map(Number);
    return (
      day >= 1 && day <= daysInMonth(year, month) && month >= 1 && month <= 12 && year >= 1990 && year <= 2100
    );
  }, 'This date does not exist');

/** Days of a month (1 to 12) of a year, Gregorian calendar. */
export function daysInMonth(year: number, month: number): number {
  if (month === 2) return year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0) ? 29 : 28;
  return [4, 6, 9, 11].includes(month) ? 30 : 31;
}
