import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { formatAgainstLimit } from '$lib/domain/formatNumber';

const number = (text: string) => Number(text.replace('\u2212', '-'));

describe('a value beside its limit', () => {
  it('has four decimals between 0.001 and 10', () => {
    expect(formatAgainstLimit(0.98731, 0.95)).toEqual({ value: '0.9873', limit: '0.9500' });
    expect(formatAgainstLimit(3.2, 0.7)).toEqual({ value: '3.2000', limit: '0.7000' });
  });

  it('has four significant digits of the larger of the two outside of that', () => {
    expect(formatAgainstLimit(12.345, 9.1)).toEqual({ value: '12.35', limit: '9.10' });
    expect(formatAgainstLimit(1234.5, 12)).toEqual({ value: '1235', limit: '12' });
    expect(formatAgainstLimit(0.000123456, 0.0001)).toEqual({ value: '0.0001235', limit: '0.0001000' });
  });

  it('gets as many digits more as tell the two apart', () => {
    expect(formatAgainstLimit(0.94999, 0.95)).toEqual({ value: '0.94999', limit: '0.95000' });
    expect(formatAgainstLimit(0.02001, 0.02)).toEqual({ value: '0.02001', limit: '0.02000' });
    expect(formatAgainstLimit(0.95 - 2 ** -53, 0.95).value).not.toBe(formatAgainstLimit(0.95, 0.95).value);
  });

  it('prints equal numbers equal', () => {
    expect(formatAgainstLimit(0.95, 0.95)).toEqual({ value: '0.9500', limit: '0.9500' });
    expect(formatAgainstLimit(-0, 0)).toEqual({ value: '0.0000', limit: '0.0000' });
  });

  it('has a real minus sign, and none before zero', () => {
    expect(formatAgainstLimit(-0.5, 0)).toEqual({ value: '\u22120.5000', limit: '0.0000' });
    expect(formatAgainstLimit(-0.00001, 0.5).value).toBe('0.0000');
  });

  it('never contradicts the comparison of the two, whatever they are', () => {
    const any = fc.double({ noNaN: true, noDefaultInfinity: true });
    const close = fc
      .tuple(any, fc.double({ min: -1e-6, max: 1e-6, noNaN: true }))
      .map(([a, by]) => [a, a * (1 + by)]);
    fc.assert(
      fc.property(fc.oneof(fc.tuple(any, any), close), ([value, limit]) => {
        const shown = formatAgainstLimit(value, limit);
        expect(Math.sign(number(shown.value) - number(shown.limit))).toBe(Math.sign(value - limit));
        expect(shown.value === shown.limit).toBe(value === limit);
      }),
      { numRuns: 2000 }
    );
  });
});
