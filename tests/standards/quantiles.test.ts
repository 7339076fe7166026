import { describe, expect, it } from 'vitest';
import {
  betaQuantile,
  chiSquaredQuantile,
  fQuantile,
  normalQuantile,
  tQuantile
} from '$lib/spectra/statistics/quantiles';
import { readTable, sharedPath } from '../support/sharedData';

/** Half a unit of the last printed place. */
function halfPlace(printed: string): number {
  const places = printed.includes('.') ? printed.split('.')[1].length : 0;
  return 0.5001 * 10 ** -places;
}

describe('quantiles agree with independently computed tables', () => {
  // Computed with scipy.stats 1.17.1, printed to four to six places.
  it.each([
    ['chi-squared', 0.95, 1, 0, '3.8415'],
    ['chi-squared', 0.95, 10, 0, '18.3070'],
    ['chi-squared', 0.99, 5, 0, '15.0863'],
    ['chi-squared', 0.999, 13, 0, '34.5282'],
    ['F', 0.95, 2, 10, '4.1028'],
    ['F', 0.975, 6, 30, '2.8667'],
    ['F', 0.99, 3, 20, '4.9382'],
    ['F', 0.999, 1, 5, '47.1808'],
    ['t', 0.975, 10, 0, '2.2281'],
    ['t', 0.999, 3, 0, '10.2145'],
    ['normal', 0.95, 0, 0, '1.644854'],
    ['normal', 0.999, 0, 0, '3.090232']
  ])('%s at %d with %d and %d degrees', (name, p, first, second, printed) => {
    expect(Math.abs(valueOf(name, p, first, second) - Number(printed))).toBeLessThan(halfPlace(printed));
  });

  it('in every row of the whole table', () => {
    const path = sharedPath('standards/f_chi2_quantiles.csv');
    if (path === null) return;
    const rows = readTable(path);
    const names: Record<string, string> = {
      chi2: 'chi-squared',
      F: 'F',
      normal: 'normal',
      't (one-sided p)': 't'
    };
    const off = rows.filter(({ distribution, p, df1, df2, quantile }) => {
      const value = valueOf(names[distribution], Number(p), Number(df1), Number(df2));
      // Large values are printed with fewer significant places than four decimals suggest.
      return Math.abs(value - Number(quantile)) > Math.max(halfPlace(quantile), 1e-9 * value);
    });
    expect(rows.length).toBeGreaterThan(2000);
    expect(off).toEqual([]);
  });
});

describe('quantiles hang together as theory says', () => {
  it.each([0.5, 0.9, 0.95, 0.99, 0.999])('at p = %d', (p) => {
    // t(m)^2 = F(1, m); chi-squared(1) = normal^2; F = beta transformed.
    expect(tQuantile((1 + p) / 2, 7) ** 2).toBeCloseTo(fQuantile(p, 1, 7), 9);
    expect(normalQuantile((1 + p) / 2) ** 2).toBeCloseTo(chiSquaredQuantile(p, 1), 9);
    const beta = betaQuantile(p, 2, 5);
    expect((beta / 2 / ((1 - beta) / 5)) * 1).toBeCloseTo(fQuantile(p, 4, 10), 9);
  });
});

describe('a quantile that does not exist is refused, never NaN', () => {
  it.each([
    ['p above 1', () => normalQuantile(1.2)],
    ['p of 1', () => chiSquaredQuantile(1, 3)],
    ['no degrees of freedom', () => fQuantile(0.95, 0, 5)],
    ['NaN', () => tQuantile(Number.NaN, 3)],
    ['a negative shape', () => betaQuantile(0.5, -1, 2)]
  ])('%s', (_, ask) => {
    expect(ask).toThrow(RangeError);
  });
});

function valueOf(name: string, p: number, first: number, second: number): number {
  if (name === 'F') return fQuantile(p, first, second);
  if (name === 't') return tQuantile(p, first);
  return name === 'normal' ? normalQuantile(p) : chiSquaredQuantile(p, first);
}
