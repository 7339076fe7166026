import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { deterministicExp } from '$lib/spectra/preprocess/deterministicExp';
import { medianInPlace } from '$lib/spectra/preprocess/median';
import '../../support/fixedSeed';

describe('deterministic exponential', () => {
  // 40-digit decimal arithmetic (Python's decimal), rounded to the nearest double.
  it.each([
    [1.0, 2.718281828459045],
    [-1.0, 0.36787944117144233],
    [0.5, 1.6487212707001282],
    [10.0, 22026.465794806718],
    [-20.25, 1.6052280551856116e-9],
    [100.0, 2.6881171418161356e43],
    [-700.5, 5.980196118639791e-305],
    [709.75, 1.7398368732641605e308],
    [1e-9, 1.000000001],
    [20.0, 485165195.4097903]
  ])('e^%d to the last place', (x, expected) => {
    expect(Math.abs(deterministicExp(x) - expected) / expected).toBeLessThan(2.3e-16);
  });

  it('stays within one unit of the last place of the engine over the whole range', () => {
    fc.assert(
      fc.property(fc.double({ min: -708, max: 709.7, noNaN: true }), (x) => {
        const engine = Math.exp(x);
        // Two units: one for either implementation.
        expect(Math.abs(deterministicExp(x) - engine)).toBeLessThanOrEqual(
          2 * 2.220446049250313e-16 * engine
        );
      }),
      { numRuns: 5000 }
    );
  });

  it('is exact at zero, and overflows and vanishes where it should', () => {
    expect(deterministicExp(0)).toBe(1);
    expect(deterministicExp(710)).toBe(Infinity);
    expect(deterministicExp(-746)).toBe(0);
    expect(deterministicExp(-740)).toBeCloseTo(4.2e-322, 322);
    expect(deterministicExp(-740)).toBeGreaterThan(0);
    expect(deterministicExp(Infinity)).toBe(Infinity);
    expect(deterministicExp(-Infinity)).toBe(0);
    expect(deterministicExp(NaN)).toBeNaN();
  });

  it('never falls as its argument rises', () => {
    for (let i = -4000; i < 4000; i++) {
      expect(deterministicExp((i + 1) / 100)).toBeGreaterThan(deterministicExp(i / 100));
    }
  });
});

describe('median by selection', () => {
  it('equals the middle of the sorted values, odd or even in number, many of them equal', () => {
    const value = fc.oneof(fc.integer({ min: -3, max: 3 }), fc.double({ min: -1e9, max: 1e9, noNaN: true }));
    fc.assert(
      fc.property(fc.array(value, { minLength: 1, maxLength: 200 }), (drawn) => {
        // Without negative zero, whose place among zeros no order fixes.
        const list = drawn.map((v) => v + 0);
        const sorted = [...list].sort((a, b) => a - b);
        const half = list.length >> 1;
        const expected = list.length % 2 === 1 ? sorted[half] : (sorted[half - 1] + sorted[half]) / 2;
        // Values past the length given are not looked at.
        const work = Float64Array.from([...list, 1e12, -1e12]);
        expect(medianInPlace(work, list.length)).toBe(expected);
        expect([...work.slice(0, list.length)].sort((a, b) => a - b)).toEqual(sorted);
      }),
      { numRuns: 1000 }
    );
  });
});
