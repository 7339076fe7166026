const parts = (instant: Date | string, timeZone: string, options: Intl.DateTimeFormatOptions) => {
  const date = typeof instant === 'string' ? new Date(instant) : instant;
  const read = new Intl.DateTimeFormat('en-GB', { timeZone, hourCycle: 'h23', ...options }).formatToParts(
    date
  );
  return (type: Intl.DateTimeFormatPartTypes) => read.find((part) => part.type === type)?.value ?? '';
};

const CLOCK = { hour: '2-digit', minute: '2-digit', timeZoneName: 'longOffset' } as const;

/** `+01:00` from `GMT+01:00`; Greenwich itself has no digits. */
const offset = (name: string) => name.replace('GMT', '') || '+00:00';

/** An instant as records show it: `2026-12-01 14:05:09 +01:00`, in the given IANA zone, with its offset then. */
export function recordTime(instant: Date | string, timeZone: string): string {
  const of = parts(instant, timeZone, {
    ...CLOCK,
    year: 'numeric',
    month: '2-digit',
    day: '2-digit',
    second: '2-digit'
  });
  const day = `${of('year').padStart(4, '0')}-${of('month')}-${of('day')}`;
  return `${day} ${of('hour')}:${of('minute')}:${of('second')} ${offset(of('timeZoneName'))}`;
}

/** An instant as a clock on the wall shows it: `14:05 +01:00`. */
export function clockTime(instant: Date | string, timeZone: string): string {
  const of = parts(instant, timeZone, CLOCK);
  return `${of('hour')}:${of('minute')} ${offset(of('timeZoneName'))}`;
}

const MONTHS = 'Jan Feb Mar Apr May Jun Jul Aug Sep Oct Nov Dec'.split(' ');

/** The day of an instant as lists show it: `1 Dec 2026`. Never in figures alone, which are read two ways. */
export function listDay(instant: Date | string, timeZone: string): string {
  const of = parts(instant, timeZone, { year: 'numeric', month: 'numeric', day: 'numeric' });
  return `${Number(of('day'))} ${MONTHS[Number(of('month')) - 1]} ${of('year')}`;
}
