import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { clockTime, listDay, recordTime } from '$lib/domain/time';

describe('the time of a record', () => {
  // Offsets and days of change from the IANA time zone database, read from memory.
  it.each([
    ['2026-12-01T13:05:09Z', 'Europe/Paris', '2026-12-01 14:05:09 +01:00'],
    ['2026-07-01T12:05:09Z', 'Europe/Paris', '2026-07-01 14:05:09 +02:00'],
    ['2026-12-01T13:05:09Z', 'UTC', '2026-12-01 13:05:09 +00:00'],
    ['2026-12-01T13:05:09Z', 'Europe/London', '2026-12-01 13:05:09 +00:00'],
    ['2026-12-01T03:05:09Z', 'America/New_York', '2026-11-30 22:05:09 -05:00'],
    ['2026-12-31T20:00:00Z', 'Asia/Kolkata', '2027-01-01 01:30:00 +05:30'],
    ['2026-12-31T23:00:00Z', 'Europe/Paris', '2027-01-01 00:00:00 +01:00']
  ])('%s in %s is %s', (instant, zone, shown) => {
    expect(recordTime(instant, zone)).toBe(shown);
    expect(recordTime(new Date(instant), zone)).toBe(shown);
  });

  it('tells the two hours apart that the clocks go back over', () => {
    expect(recordTime('2026-10-25T00:30:00Z', 'Europe/Paris')).toBe('2026-10-25 02:30:00 +02:00');
    expect(recordTime('2026-10-25T01:30:00Z', 'Europe/Paris')).toBe('2026-10-25 02:30:00 +01:00');
  });

  it('names the instant exactly: reading it back gives the same second', () => {
    const instants = fc.integer({ min: Date.UTC(1990, 0, 1) / 1000, max: Date.UTC(2100, 0, 1) / 1000 });
    const zones = fc.constantFrom(
      'UTC',
      'Europe/Paris',
      'America/New_York',
      'Asia/Kolkata',
      'Australia/Lord_Howe'
    );
    fc.assert(
      fc.property(instants, zones, (seconds, zone) => {
        const [day, time, offset] = recordTime(new Date(seconds * 1000), zone).split(' ');
        expect(Date.parse(`${day}T${time}${offset}`)).toBe(seconds * 1000);
      })
    );
  });
});

describe('shorter times', () => {
  it('a clock shows hours and minutes with the offset', () => {
    expect(clockTime('2026-12-01T13:05:09Z', 'Europe/Paris')).toBe('14:05 +01:00');
    expect(clockTime('2026-12-01T23:59:59Z', 'UTC')).toBe('23:59 +00:00');
  });

  it('a list shows the day in the site, with the month in letters', () => {
    expect(listDay('2026-12-01T13:05:09Z', 'UTC')).toBe('1 Dec 2026');
    expect(listDay('2026-08-31T23:30:00Z', 'Europe/Paris')).toBe('1 Sep 2026');
  });
});
