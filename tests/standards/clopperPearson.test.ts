import { describe, expect, it } from 'vitest';
import { clopperPearson, clopperPearsonUpper } from '$lib/spectra/statistics/clopperPearson';
import { readTable, sharedPath } from '../support/sharedData';

// Clopper & Pearson, Biometrika 26:404 (1934); values computed with scipy 1.17.1, printed to six places.
const TABLE: [n: number, k: number, low: number, high: number, upper: number][] = [
  [10, 0, 0, 0.308497, 0.258866],
  [10, 1, 0.002529, 0.445016, 0.394163],
  [20, 0, 0, 0.168433, 0.139108],
  [20, 3, 0.032071, 0.378927, 0.343664],
  [59, 0, 0, 0.060609, 0.049508],
  [100, 5, 0.016432, 0.112835, 0.102253],
  [299, 0, 0, 0.012262, 0.009969],
  [299, 1, 0.000085, 0.018492, 0.015767],
  [1000, 2, 0.000242, 0.007206, 0.006282],
  [3000, 0, 0, 0.001229, 0.000998]
];

describe('the exact interval of an error rate', () => {
  it.each(TABLE)('%i trials with %i failures', (n, k, low, high, upper) => {
    const interval = clopperPearson(k, n, 0.95);
    expect(Math.abs(interval.low - low)).toBeLessThan(6e-7);
    expect(Math.abs(interval.high - high)).toBeLessThan(6e-7);
    expect(Math.abs(clopperPearsonUpper(k, n, 0.95) - upper)).toBeLessThan(6e-7);
  });

  it('agrees with every row of the whole table', () => {
    const path = sharedPath('standards/clopper_pearson.csv');
    if (path === null) return;
    const rows = readTable(path);
    expect(rows.length).toBeGreaterThan(100);
    for (const row of rows) {
      const interval = clopperPearson(Number(row.k), Number(row.n), 0.95);
      const upper = clopperPearsonUpper(Number(row.k), Number(row.n), 0.95);
      expect(Math.abs(interval.low - Number(row.cp95_two_sided_low))).toBeLessThan(6e-7);
      expect(Math.abs(interval.high - Number(row.cp95_two_sided_high))).toBeLessThan(6e-7);
      expect(Math.abs(upper - Number(row.cp95_one_sided_upper))).toBeLessThan(6e-7);
    }
  });

  it('covers: the binomial chance of k or fewer failures at the upper bound is exactly 1 - confidence', () => {
    for (const [n, k] of [
      [12, 1],
      [40, 3],
      [150, 0]
    ]) {
      const rate = clopperPearsonUpper(k, n, 0.9);
      expect(binomialAtMost(k, n, rate)).toBeCloseTo(0.1, 10);
    }
  });

  it('is mirrored when failures and successes change places', () => {
    const a = clopperPearson(3, 17, 0.95);
    const b = clopperPearson(14, 17, 0.95);
    expect(a.low).toBeCloseTo(1 - b.high, 12);
    expect(a.high).toBeCloseTo(1 - b.low, 12);
  });

  it('reaches 1 when everything failed', () => {
    expect(clopperPearson(5, 5, 0.95).high).toBe(1);
    expect(clopperPearsonUpper(5, 5, 0.95)).toBe(1);
  });

  it.each([
    [4, 3, 0.95],
    [-1, 3, 0.95],
    [0, 0, 0.95],
    [1.5, 3, 0.95],
    [1, 3, 1]
  ])('refuses %d failures in %d trials at confidence %d', (k, n, confidence) => {
    expect(() => clopperPearson(k, n, confidence)).toThrow(RangeError);
  });
});

function binomialAtMost(k: number, n: number, rate: number): number {
  let term = (1 - rate) ** n;
  let sum = term;
  for (let i = 1; i <= k; i++) {
    term *= ((n - i + 1) / i) * (rate / (1 - rate));
    sum += term;
  }
  return sum;
}
