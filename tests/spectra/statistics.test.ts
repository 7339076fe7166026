import { describe, expect, it } from 'vitest';
import { seededRandom, shuffled } from '$lib/spectra/statistics/seededRandom';

describe('the seeded generator', () => {
  it('gives the same numbers for the same seed, others for another', () => {
    const draw = (seed: number) => {
      const random = seededRandom(seed);
      return Array.from({ length: 5 }, () => random());
    };
    expect(draw(1)).toEqual(draw(1));
    expect(draw(1)).not.toEqual(draw(2));
  });

  it('fills [0, 1) evenly: ten bins of 100,000 draws within five standard deviations', () => {
    const random = seededRandom(42);
    const bins = new Array<number>(10).fill(0);
    for (let i = 0; i < 100_000; i++) bins[Math.floor(10 * random())]++;
    // Each bin has mean 10,000 and standard deviation sqrt(100000 x 0.1 x 0.9) = 95.
    bins.forEach((count) => expect(Math.abs(count - 10_000)).toBeLessThan(5 * 95));
  });

  it('does not repeat itself from one draw to the next', () => {
    const random = seededRandom(3);
    let product = 0;
    let last = random() - 0.5;
    for (let i = 0; i < 50_000; i++) {
      const next = random() - 0.5;
      product += last * next;
      last = next;
    }
    // Lag-one correlation: standard error 1/sqrt(50000) = 0.0045 of the variance 1/12.
    expect(Math.abs((12 * product) / 50_000)).toBeLessThan(5 * 0.0045);
  });

  it('shuffles without loss, leaving the original alone, each place equally likely', () => {
    const items = ['a', 'b', 'c', 'd'];
    const random = seededRandom(7);
    const first = new Map<string, number>();
    for (let i = 0; i < 8_000; i++) {
      const mixed = shuffled(items, random);
      expect([...mixed].sort()).toEqual(items);
      first.set(mixed[0], (first.get(mixed[0]) ?? 0) + 1);
    }
    expect(items).toEqual(['a', 'b', 'c', 'd']);
    for (const item of items) expect(Math.abs((first.get(item) ?? 0) - 2_000)).toBeLessThan(200);
  });
});
