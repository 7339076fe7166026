/** Day, month and year as typed in three fields. */
export interface DateParts {
  day: string;
  month: string;
  year: string;
}

/** The three fields of a date `YYYY-MM-DD`; what is not such a date gives empty fields, as far as it can be read. */
export function dateParts(text: string): DateParts {
  const [, year = '', month = '', day = ''] = /^([^-]*)-?([^-]*)-?([^-]*)$/.exec(text.trim()) ?? [];
  return { day, month, year };
}

/**
 * The date of three fields as `YYYY-MM-DD`, empty when all three are. Half-typed or impossible dates keep what was
 * typed (`2026-13-`), so that the server can say what is wrong and the page can show it again.
 */
export function joinedDate(parts: DateParts): string {
  const day = parts.day.trim();
  const month = parts.month.trim();
  const year = parts.year.trim();
  if (day === '' && month === '' && year === '') return '';
  const two = (text: string) => (/^\d$/.test(text) ? `0${text}` : text);
  return `${year}-${two(month)}-${two(day)}`;
}
