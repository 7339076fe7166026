import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { msc } from '$lib/spectra/preprocess/msc';
import { snv } from '$lib/spectra/preprocess/snv';
import { unitVector } from '$lib/spectra/preprocess/unitVector';
import '../../support/fixedSeed';
import { onUniformAxis, relativeDistance, rippledCurve } from '../../support/preprocessCurve';

const values = fc
  .array(fc.double({ min: -1e6, max: 1e6, noNaN: true }), { minLength: 16, maxLength: 200 })
  .filter((list) => Math.max(...list) - Math.min(...list) > 1e-3);

describe('standard normal variate', () => {
  it('has mean 0 and standard deviation 1, divisor n - 1, whatever comes in', () => {
    fc.assert(
      fc.property(values, (list) => {
        const scaled = snv.apply(onUniformAxis(list), {}, {}).intensity;
        const mean = scaled.reduce((sum, value) => sum + value, 0) / scaled.length;
        const squares = scaled.reduce((sum, value) => sum + (value - mean) ** 2, 0);
        expect(Math.abs(mean)).toBeLessThan(1e-6);
        expect(Math.sqrt(squares / (scaled.length - 1))).toBeCloseTo(1, 6);
      })
    );
  });

  it('a flat spectrum is refused, also one flat but for rounding', () => {
    for (const value of [0, 5, 0.1, 1e9 / 3]) {
      const flat = onUniformAxis(new Array<number>(100).fill(value));
      expect(() => snv.apply(flat, {}, {})).toThrow(expect.objectContaining({ code: 'zero-variance' }));
    }
    const rounded = onUniformAxis(
      Array.from({ length: 100 }, (_, i) => 0.1 * (1 + (i % 2) * Number.EPSILON))
    );
    expect(() => snv.apply(rounded, {}, {})).toThrow(expect.objectContaining({ code: 'zero-variance' }));
  });
});

describe('multiplicative scatter correction', () => {
  const reference = rippledCurve();

  it('gives the reference back from any scaled and shifted copy of it', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.01, max: 100, noNaN: true }),
        fc.integer({ min: -999, max: 999 }),
        (b, a) => {
          const copy = { ...reference, intensity: reference.intensity.map((value) => a + b * value) };
          expect(
            relativeDistance(msc.apply(copy, {}, { reference }).intensity, reference.intensity)
          ).toBeLessThan(1e-9);
        }
      )
    );
  });

  it('never turns a spectrum that runs against the reference into one that looks like it', () => {
    const against = { ...reference, intensity: reference.intensity.map((value) => 500 - 2 * value) };
    const corrected = msc.apply(against, {}, { reference }).intensity;
    expect(corrected[30]).toBeLessThan(corrected[50]);
    expect(reference.intensity[30]).toBeGreaterThan(reference.intensity[50]);
  });

  it('no reference, one on another axis, a flat one, and a flat spectrum are refused', () => {
    const refuse = (spectrum: typeof reference, ref?: typeof reference) => () =>
      msc.apply(spectrum, {}, { reference: ref });
    const flat = onUniformAxis(new Array<number>(120).fill(3));
    expect(refuse(reference)).toThrow(expect.objectContaining({ code: 'no-reference' }));
    expect(refuse(reference, rippledCurve(1, 100))).toThrow(
      expect.objectContaining({ code: 'no-reference' })
    );
    expect(refuse(reference, rippledCurve(2))).toThrow(expect.objectContaining({ code: 'no-reference' }));
    expect(refuse(reference, flat)).toThrow(expect.objectContaining({ code: 'zero-variance' }));
    expect(refuse(flat, reference)).toThrow(expect.objectContaining({ code: 'zero-variance' }));
  });
});

describe('unit vector', () => {
  it('has length 1 and keeps every ratio', () => {
    const scaled = unitVector.apply(onUniformAxis([3, 4, 0, 0]), {}, {}).intensity;
    expect([...scaled]).toEqual([0.6, 0.8, 0, 0]);
  });

  it('a spectrum of zeros is refused', () => {
    const zeros = onUniformAxis(new Array<number>(20).fill(0));
    expect(() => unitVector.apply(zeros, {}, {})).toThrow(expect.objectContaining({ code: 'zero-variance' }));
  });
});
