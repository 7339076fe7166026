import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { centredUnit, correlation, cosine } from '$lib/spectra/compare/correlation';
import { dot, dotProducts } from '$lib/spectra/compare/dotProducts';
import { interleavedDots, interleaveRows } from '$lib/spectra/compare/interleavedRows';
import { bestRivals, packRivals, rivalCorrelations } from '$lib/spectra/compare/rivals';
import '../support/fixedSeed';
import { madeClass } from '../support/madeSpectra';

const vector = (length: number) =>
  fc.array(fc.double({ min: -1e6, max: 1e6, noNaN: true }), { minLength: length, maxLength: length });

describe('dot products', () => {
  it('of packed rows equal those of single rows, bit for bit, however many rows there are', () => {
    const rows = madeClass({ count: 11, points: 37, factors: [2, 1], noise: 0.3, seed: 3 });
    const packed = new Float64Array(11 * 37);
    rows.forEach((row, i) => packed.set(row, i * 37));
    for (let count = 0; count <= 11; count++) {
      const out = new Float64Array(count);
      dotProducts(packed, 37, rows[0], out, 11 - count, count);
      const single = rows.slice(11 - count).map((row) => dot(row, rows[0]));
      expect(Array.from(out)).toEqual(single);
    }
  });

  it('of rows stored four abreast equal those of single rows, bit for bit, however many rows there are', () => {
    const rows = madeClass({ count: 11, points: 37, factors: [2, 1], noise: 0.3, seed: 3 });
    for (let count = 0; count <= 11; count++) {
      const some = rows.slice(0, count);
      const found = interleavedDots(interleaveRows(some, 37), rows[4]);
      expect(Array.from(found)).toEqual(some.map((row) => dot(row, rows[4])));
    }
    expect(() => interleaveRows(rows, 36)).toThrow(RangeError);
    expect(() => interleavedDots(interleaveRows(rows, 37), new Float64Array(36))).toThrow(RangeError);
  });

  it('are summed from first to last: large, small, minus large loses the small one', () => {
    const ones = Float64Array.from([1, 1, 1]);
    expect(dot(Float64Array.from([1e16, 1, -1e16]), ones)).toBe(0);
    expect(dot(Float64Array.from([1e16, -1e16, 1]), ones)).toBe(1);
  });

  it('refuse what does not fit together', () => {
    const x = new Float64Array(3);
    expect(() => dot(x, new Float64Array(2))).toThrow(RangeError);
    expect(() => dotProducts(new Float64Array(5), 3, x, new Float64Array(2), 0, 2)).toThrow(RangeError);
    expect(() => dotProducts(new Float64Array(6), 3, x, new Float64Array(1), 0, 2)).toThrow(RangeError);
  });
});

describe('correlation', () => {
  it('is symmetric, bounded, and 1 with itself', () => {
    fc.assert(
      fc.property(vector(12), vector(12), (a, b) => {
        const x = Float64Array.from(a);
        const y = Float64Array.from(b);
        const r = correlation(x, y);
        expect(r).toBe(correlation(y, x));
        expect(Math.abs(r)).toBeLessThanOrEqual(1);
        if (centredUnit(x) !== null) expect(correlation(x, x)).toBeCloseTo(1, 12);
      })
    );
  });

  it('does not see scale, offset; sees sign', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: -1000, max: 1000 }), { minLength: 8, maxLength: 8 }),
        fc.array(fc.integer({ min: -1000, max: 1000 }), { minLength: 8, maxLength: 8 }),
        fc.integer({ min: 1, max: 50 }),
        fc.integer({ min: -500, max: 500 }),
        (a, b, scale, offset) => {
          const x = Float64Array.from(a);
          const y = Float64Array.from(b);
          const moved = y.map((value) => scale * value + offset);
          expect(correlation(x, moved)).toBeCloseTo(correlation(x, y), 10);
          expect(
            correlation(
              x,
              y.map((value) => -value)
            )
          ).toBeCloseTo(-correlation(x, y), 12);
        }
      )
    );
  });

  it('of a constant spectrum is 0, also where its mean does not come out even', () => {
    const x = Float64Array.from({ length: 10 }, (_, i) => i * i);
    expect(correlation(new Float64Array(10).fill(0.1), x)).toBe(0);
    expect(correlation(x, new Float64Array(10))).toBe(0);
    expect(cosine(new Float64Array(10), x)).toBe(0);
  });

  it('of unequal lengths is refused', () => {
    expect(() => correlation(new Float64Array(3), new Float64Array(4))).toThrow(RangeError);
  });

  it('leaves its inputs as they were', () => {
    const x = Float64Array.from([3, 1, 2]);
    correlation(x, x);
    expect(Array.from(x)).toEqual([3, 1, 2]);
  });
});

describe('best rivals', () => {
  const library = madeClass({ count: 23, points: 60, factors: [3, 2, 1], noise: 0.5, seed: 5 });
  const matrix = packRivals(library);
  const scan = library[17].map((value, j) => value + 0.01 * Math.cos(j));

  it('carry the same correlation as the claimed material would, bit for bit', () => {
    const found = rivalCorrelations(scan, matrix);
    library.forEach((row, i) => expect(found[i]).toBe(correlation(scan, row)));
  });

  it('come best first and are the best there are', () => {
    const best = bestRivals(scan, matrix, 5);
    expect(best[0].index).toBe(17);
    const all = Array.from(rivalCorrelations(scan, matrix)).sort((a, b) => b - a);
    expect(best.map((rival) => rival.correlation)).toEqual(all.slice(0, 5));
  });

  it('keep row order among equals', () => {
    const twice = packRivals([library[2], library[4], library[2], library[4]]);
    expect(bestRivals(library[4], twice, 4).map((rival) => rival.index)).toEqual([1, 3, 0, 2]);
  });

  it('are as many as asked for, or as there are', () => {
    expect(bestRivals(scan, matrix, 0)).toEqual([]);
    expect(bestRivals(scan, matrix, 99)).toHaveLength(23);
    expect(bestRivals(scan, packRivals([]), 3)).toEqual([]);
  });

  it('of a flat scan all correlate 0, and a flat library row is no rival', () => {
    expect(bestRivals(new Float64Array(60).fill(4), matrix, 2).map((r) => r.correlation)).toEqual([0, 0]);
    const flat = packRivals([new Float64Array(60).fill(1), library[0]]);
    expect(bestRivals(library[0], flat, 2)[1]).toEqual({ index: 0, correlation: 0 });
  });

  it('of a library with rows of unequal length are refused', () => {
    expect(() => packRivals([library[0], library[1].subarray(1)])).toThrow(RangeError);
  });
});
