import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decimate, extent, firstAtLeast, nearest, valueAt } from '$lib/ui/spectrum/decimate';

const axis = (points: number, from = 200, step = 1) =>
  Array.from({ length: points }, (_, i) => from + i * step);
const values = fc.array(fc.double({ min: -1e3, max: 1e3, noNaN: true }), { minLength: 2, maxLength: 400 });
const size = (y: readonly number[]) => [Math.min(...y), Math.max(...y)];

describe('a line thinned to its pixels', () => {
  it('comes back whole where it has few points', () => {
    const x = axis(5);
    expect(decimate(x, [1, 2, 3, 2, 1], [200, 204], 100)).toEqual(x.map((at, i) => [at, [1, 2, 3, 2, 1][i]]));
  });

  it('keeps a band of a single point at its full height among 100,000 points', () => {
    const x = axis(100_000, 0, 0.02);
    const y = x.map(() => 0.1);
    y[61_803] = 9;
    const thinned = decimate(x, y, [0, 2000], 800);
    expect(thinned.length).toBeLessThanOrEqual(4 * 801);
    expect(thinned).toContainEqual([x[61_803], 9]);
  });

  it('has the lowest and the highest value of the line, and only points of the line, in order', () => {
    fc.assert(
      fc.property(values, fc.integer({ min: 1, max: 20 }), (y, columns) => {
        const x = axis(y.length);
        const thinned = decimate(x, y, [x[0], x[x.length - 1]], columns);
        expect(size(thinned.map(([, value]) => value))).toEqual(size(y));
        for (const [at, value] of thinned) expect(value).toBe(y[at - 200]);
        expect(thinned.every(([at], i) => i === 0 || at > thinned[i - 1][0])).toBe(true);
      })
    );
  });

  it('has the lowest and the highest value of each pixel column', () => {
    const x = axis(1000, 0);
    const y = x.map((at) => Math.sin(at * at));
    const thinned = decimate(x, y, [0, 1000], 50);
    for (let column = 0; column < 50; column++) {
      const inside = ([at]: readonly [number, number]) => Math.floor(at / 20) === column;
      const kept = thinned.filter(inside).map(([, value]) => value);
      expect(size(kept)).toEqual(size(y.slice(column * 20, column * 20 + 20)));
    }
  });

  it('goes one point beyond each edge of the window and no further', () => {
    const x = axis(100);
    const thinned = decimate(x, x, [220.5, 230.5], 100);
    expect(thinned[0][0]).toBe(220);
    expect(thinned[thinned.length - 1][0]).toBe(231);
  });

  it('keeps gaps', () => {
    const x = axis(1000);
    const y = x.map((_, i) => (i >= 500 && i < 510 ? NaN : 1));
    const thinned = decimate(x, y, [200, 1199], 20);
    expect(thinned.some(([, value]) => Number.isNaN(value))).toBe(true);
    expect(thinned.filter(([, value]) => !Number.isNaN(value)).length).toBeGreaterThan(20);
  });
});

describe('reading a line', () => {
  const x = [100, 110, 120];
  const y = [1, 3, NaN];

  it('is straight between two points and nothing outside or in a gap', () => {
    expect(valueAt(x, y, 105)).toBe(2);
    expect(valueAt(x, y, 110)).toBe(3);
    expect([99, 115, 120, 121].map((shift) => valueAt(x, y, shift))).toEqual([null, null, null, null]);
  });

  it('finds the nearest point, at and beyond the ends too', () => {
    expect([0, 104, 106, 500].map((shift) => nearest(x, shift))).toEqual([0, 0, 1, 2]);
  });

  it('finds the first point not below a shift as a plain search does', () => {
    fc.assert(
      fc.property(
        fc.uniqueArray(fc.integer({ min: 0, max: 100 })),
        fc.integer({ min: -5, max: 105 }),
        (list, value) => {
          const rising = [...list].sort((a, b) => a - b);
          const plain = rising.findIndex((at) => at >= value);
          expect(firstAtLeast(rising, value)).toBe(plain < 0 ? rising.length : plain);
        }
      )
    );
  });

  it('tells the smallest and largest value in a window, null where there is none', () => {
    expect(extent([1, 2, 3, 4], [5, NaN, -1, 9], [1, 3])).toEqual([-1, 5]);
    expect(extent([1, 2], [5, 6], [3, 4])).toBeNull();
  });
});
