import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { resample, resampleGrid } from '$lib/spectra/preprocess/resample';
import { lorentzians, seededNormal } from '../../support/madeSpectra';
import '../../support/fixedSeed';
import { onUniformAxis } from '../../support/preprocessCurve';

const grid = { fromCm1: 300, toCm1: 400, stepCm1: 1 };
const refusal = (options: object) =>
  resample.options
    .safeParse(options)
    .error?.issues.map((issue) => issue.message)
    .join();

describe('resampling to a uniform grid', () => {
  it('a spectrum already on the grid comes back bit for bit', () => {
    const spectrum = lorentzians({ from: 300, to: 400, step: 1 }, [
      { centreCm1: 350, height: 9, fwhmCm1: 8 }
    ]);
    const out = resample.apply(spectrum, grid, {});
    expect([...out.intensity]).toEqual([...spectrum.intensity]);
    expect([...out.shiftCm1]).toEqual([...spectrum.shiftCm1]);
  });

  it('keeps a straight line exact at any spacing of the input, coarser or much finer', () => {
    const spacing = fc.array(fc.double({ min: 0.05, max: 3, noNaN: true }), {
      minLength: 60,
      maxLength: 2000
    });
    fc.assert(
      fc.property(spacing, (spacings) => {
        const shiftCm1 = Float64Array.from(spacings);
        for (let i = 1; i < shiftCm1.length; i++) shiftCm1[i] += shiftCm1[i - 1];
        const intensity = shiftCm1.map((x) => 7 - 3 * x);
        const from = Math.ceil(shiftCm1[0]);
        const to = Math.floor(shiftCm1[shiftCm1.length - 1]);
        if (to - from < 15) return;
        const out = resample.apply({ shiftCm1, intensity }, { fromCm1: from, toCm1: to, stepCm1: 1 }, {});
        for (let i = 0; i < out.shiftCm1.length; i++) {
          expect(Math.abs(out.intensity[i] - (7 - 3 * (from + i)))).toBeLessThan(1e-9 * (1 + to));
        }
      })
    );
  });

  it('reads between the points of a coarser input along the joining line', () => {
    const out = resample.apply(
      onUniformAxis([0, 10, 0, 10, 0, 10, 0, 10, 0], 2, 300),
      { ...grid, toCm1: 316 },
      {}
    );
    expect([...out.intensity]).toEqual([0, 5, 10, 5, 0, 5, 10, 5, 0, 5, 10, 5, 0, 5, 10, 5, 0]);
  });

  it('averages over the cell when the input is finer, as in the worked example', () => {
    const fine = onUniformAxis(
      Array.from({ length: 40 }, (_, i) => 10 * i),
      0.5,
      100
    );
    const out = resample.apply(fine, { fromCm1: 100.5, toCm1: 116.5, stepCm1: 1 }, {});
    expect(out.intensity[0]).toBeCloseTo(10, 12);
    const spike = onUniformAxis(
      fine.intensity.map((_, i) => (i === 10 ? 8 : 0)),
      0.5,
      100
    );
    const spread = resample.apply(spike, { fromCm1: 101, toCm1: 117, stepCm1: 1 }, {}).intensity;
    // The triangle of half-width 0.5 and height 8 at 105 has area 4, all of it within the cell 104.5 to 105.5.
    expect([...spread].map((v) => Number(v.toFixed(12)))).toEqual([
      0,
      0,
      0,
      0,
      4,
      ...new Array<number>(12).fill(0)
    ]);
  });

  it('noise of a finer input is averaged, not passed on by dropping points', () => {
    const normal = seededNormal(3);
    const noise = onUniformAxis(
      Array.from({ length: 4001 }, () => normal()),
      0.1,
      299
    );
    const out = resample.apply(noise, { fromCm1: 300, toCm1: 690, stepCm1: 1 }, {}).intensity;
    const sd = Math.sqrt(out.reduce((sum, value) => sum + value * value, 0) / out.length);
    // Ten points per cell: near 1 / sqrt(10) = 0.32.
    expect(sd).toBeGreaterThan(0.25);
    expect(sd).toBeLessThan(0.4);
  });

  it('reaches the exact ends of the input, and nothing beyond them', () => {
    const fine = onUniformAxis(
      Array.from({ length: 401 }, (_, i) => i * i),
      0.25,
      300
    );
    const out = resample.apply(fine, grid, {});
    expect(out.intensity[0]).toBe(0);
    expect(out.intensity[100]).toBe(160_000);
    expect(() => resample.apply(fine, { ...grid, fromCm1: 299 }, {})).toThrow(
      expect.objectContaining({ code: 'outside-axis' })
    );
    expect(() => resample.apply(fine, { ...grid, toCm1: 401 }, {})).toThrow(
      /covers 300\.0 to 400\.0 cm-1; the method needs 300 to 401 cm-1/
    );
  });

  it('the grid of a step that binary numbers cannot hold ends exactly where it should', () => {
    const points = resampleGrid({ fromCm1: 300, toCm1: 310, stepCm1: 0.1 });
    expect(points).toHaveLength(101);
    expect(points[100]).toBe(310);
    expect(points[3]).toBe(300 + 3 * 0.1);
  });

  it('a grid that does not come out even, is upside down, or has too few or too many points is refused', () => {
    expect(refusal({ fromCm1: 300, toCm1: 1800.5, stepCm1: 1 })).toContain('whole number of steps');
    expect(refusal({ fromCm1: 1800, toCm1: 300, stepCm1: 1 })).toContain('0 points');
    expect(refusal({ fromCm1: 300, toCm1: 310, stepCm1: 1 })).toContain('11 points');
    expect(refusal({ fromCm1: 0, toCm1: 4000, stepCm1: 0.1 })).toContain('40001 points');
    expect(refusal({ fromCm1: 300, toCm1: 1800, stepCm1: 1 })).toBeUndefined();
  });
});
