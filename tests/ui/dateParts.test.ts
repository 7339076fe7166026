import { describe, expect, it } from 'vitest';
import { dateParts, joinedDate } from '$lib/ui/kit/dateParts';

describe('a date typed in three fields', () => {
  it('is the date of the record, with leading zeros', () => {
    expect(joinedDate({ day: '5', month: '1', year: '2026' })).toBe('2026-01-05');
    expect(joinedDate({ day: ' 31 ', month: '12', year: '2026 ' })).toBe('2026-12-31');
  });

  it('is empty when nothing is typed', () => {
    expect(joinedDate({ day: '', month: ' ', year: '' })).toBe('');
  });

  it.each(['2026-02-30', '2026-13-01', '2026-12-', '-12-05', '26-1x-05'])(
    'keeps %s as it was typed, for the server to refuse and the page to show again',
    (text) => {
      expect(joinedDate(dateParts(text))).toBe(text);
    }
  );

  it('comes apart into its fields', () => {
    expect(dateParts('2026-12-05')).toEqual({ day: '05', month: '12', year: '2026' });
    expect(dateParts('')).toEqual({ day: '', month: '', year: '' });
  });
});
