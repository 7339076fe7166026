import { describe, expect, it } from 'vitest';
import { correlation, cosine } from '$lib/spectra/compare/correlation';

// Worked vector, computed independently to eight places; which formula is meant must be named, for they differ.
const a = Float64Array.from([1, 2, 3, 4, 3, 2, 1]);
const b = Float64Array.from([1, 2, 4, 4, 2, 2, 1]);
const scaled = b.map((value) => 2 * value + 3);
const difference = (x: Float64Array) => x.slice(1).map((value, i) => value - x[i]);

describe('similarity of two short vectors', () => {
  it('Pearson correlation', () => {
    expect(correlation(a, b)).toBeCloseTo(0.88762536, 8);
    expect(correlation(a, b) ** 2).toBeCloseTo(0.78787879, 8);
  });

  it('cosine, its square, and the angle', () => {
    expect(cosine(a, b)).toBeCloseTo(0.97801929, 8);
    expect(100 * cosine(a, b) ** 2).toBeCloseTo(95.65217391, 7);
    expect((Math.acos(cosine(a, b)) * 180) / Math.PI).toBeCloseTo(12.03530731, 7);
  });

  it('cosine of first differences', () => {
    expect(cosine(difference(a), difference(b))).toBeCloseTo(0.77459667, 8);
  });

  it('scale and offset leave correlation alone and move the cosine', () => {
    expect(correlation(a, scaled)).toBeCloseTo(0.88762536, 8);
    expect(cosine(difference(a), difference(scaled))).toBeCloseTo(0.77459667, 8);
    expect(cosine(a, scaled)).toBeCloseTo(0.97854389, 8);
  });
});
