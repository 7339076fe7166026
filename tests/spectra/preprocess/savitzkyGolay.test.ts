import fc from 'fast-check';
import { sgg } from 'ml-savitzky-golay-generalized';
import { describe, expect, it } from 'vitest';
import { dropRanges } from '$lib/spectra/preprocess/ranges';
import { savitzkyGolay } from '$lib/spectra/preprocess/savitzkyGolay';
import '../../support/fixedSeed';
import { onUniformAxis, relativeDistance, rippledCurve } from '../../support/preprocessCurve';

const run = (spectrum: ReturnType<typeof rippledCurve>, window: number, order: number, derivative: number) =>
  savitzkyGolay.apply(spectrum, { window, order, derivative }, {}).intensity;

describe('Savitzky-Golay filter', () => {
  it('agrees with another implementation for every window, order and derivative tried', () => {
    for (const stepCm1 of [0.5, 1, 2]) {
      const curve = rippledCurve(stepCm1);
      for (const window of [5, 7, 9, 15, 21, 33]) {
        for (const order of [2, 3, 4]) {
          for (const derivative of [0, 1, 2]) {
            const other = sgg(curve.intensity, stepCm1, {
              windowSize: window,
              polynomial: order,
              derivative
            });
            expect(relativeDistance(run(curve, window, order, derivative), other)).toBeLessThan(1e-9);
          }
        }
      }
    }
  });

  it('is exact on polynomials up to its order, in value and derivative, ends included', () => {
    const coefficient = fc.double({ min: -10, max: 10, noNaN: true });
    const window = fc.constantFrom(5, 9, 15, 25);
    const step = fc.constantFrom(0.25, 0.5, 1, 2);
    fc.assert(
      fc.property(coefficient, coefficient, coefficient, window, step, (a, b, c, points, stepCm1) => {
        const x = (i: number) => (i - 30) * stepCm1;
        const curve = onUniformAxis(
          Array.from({ length: 60 }, (_, i) => a + b * x(i) + c * x(i) * x(i)),
          stepCm1
        );
        const size = Math.max(1, ...curve.intensity.map(Math.abs));
        const exact = [(i: number) => curve.intensity[i], (i: number) => b + 2 * c * x(i), () => 2 * c];
        exact.forEach((value, derivative) => {
          const filtered = run(curve, points, 2, derivative);
          for (let i = 0; i < 60; i++) {
            expect(Math.abs(filtered[i] - value(i))).toBeLessThan((1e-11 * size) / stepCm1 ** derivative);
          }
        });
      })
    );
  });

  it('a derivative of a constant is exactly zero at every point', () => {
    const flat = onUniformAxis(new Array<number>(40).fill(0.1));
    for (const derivative of [1, 2]) {
      expect([...run(flat, 11, 3, derivative)].every((value) => value === 0)).toBe(true);
    }
  });

  it('derivatives are per cm-1: a finer grid of the same line gives the same slope', () => {
    for (const stepCm1 of [0.25, 1, 4]) {
      const line = onUniformAxis(
        Array.from({ length: 40 }, (_, i) => 5 * i * stepCm1),
        stepCm1
      );
      for (const slope of run(line, 9, 2, 1)) expect(slope).toBeCloseTo(5, 10);
    }
  });

  it('each side of a dropped range is filtered alone', () => {
    const curve = rippledCurve();
    const cut = dropRanges.apply(curve, { ranges: [{ fromCm1: 440, toCm1: 460 }] }, {});
    const left = { shiftCm1: curve.shiftCm1.slice(0, 40), intensity: curve.intensity.slice(0, 40) };
    const right = { shiftCm1: curve.shiftCm1.slice(61), intensity: curve.intensity.slice(61) };
    expect([...run(cut, 11, 2, 1)]).toEqual([...run(left, 11, 2, 1), ...run(right, 11, 2, 1)]);
  });

  it('a piece shorter than the window is refused, one as long as the window is not', () => {
    const curve = rippledCurve();
    const keep = (toCm1: number) =>
      dropRanges.apply(curve, { ranges: [{ fromCm1: toCm1 + 0.5, toCm1: 450 }] }, {});
    expect(() => run(keep(409), 11, 2, 1)).toThrow(expect.objectContaining({ code: 'too-few-points' }));
    expect(run(keep(410), 11, 2, 1)).toHaveLength(80);
  });

  it('an uneven axis is refused', () => {
    const curve = rippledCurve();
    const uneven = { ...curve, shiftCm1: curve.shiftCm1.map((x, i) => x + 0.0005 * i * i) };
    expect(() => run(uneven, 11, 2, 1)).toThrow(expect.objectContaining({ code: 'axis-not-uniform' }));
  });

  it.each([
    [{ window: 10, order: 2, derivative: 1 }, 'odd'],
    [{ window: 3, order: 3, derivative: 0 }, 'less than the number of points'],
    [{ window: 9, order: 1, derivative: 2 }, 'higher than the order'],
    [{ window: 103, order: 2, derivative: 1 }, '3 to 101']
  ])('options %j are refused in words', (options, words) => {
    const read = savitzkyGolay.options.safeParse(options);
    expect(read.error?.issues.map((issue) => issue.message).join()).toContain(words);
  });
});
