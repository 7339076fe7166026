import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { MIN_WHITTAKER_POINTS, whittaker } from '$lib/spectra/preprocess/whittaker';
import { denseWhittaker } from '../../support/denseBaselines';
import '../../support/fixedSeed';
import { relativeDistance, rippledCurve } from '../../support/preprocessCurve';

const smooth = (y: readonly number[], weights: readonly number[], lambda: number) => {
  const z = new Float64Array(y.length);
  whittaker(Float64Array.from(y), Float64Array.from(weights), lambda, z);
  return z;
};

describe('Whittaker smoother', () => {
  it('agrees with a dense solve for every length from the least to 40', () => {
    const all = [...rippledCurve().intensity];
    for (let n = MIN_WHITTAKER_POINTS; n <= 40; n++) {
      const y = all.slice(20, 20 + n);
      const weights = y.map((_, i) => 0.01 + ((i * 7) % 5) / 4);
      expect(relativeDistance(smooth(y, weights, 100), denseWhittaker(y, weights, 100))).toBeLessThan(1e-10);
    }
  });

  it('agrees with a dense solve for generated values, weights (some of them zero) and smoothness', () => {
    const weight = fc.oneof(fc.constant(0), fc.double({ min: 0.001, max: 1, noNaN: true }));
    const point = fc.tuple(fc.double({ min: -1000, max: 1000, noNaN: true }), weight);
    fc.assert(
      fc.property(
        fc.array(point, { minLength: 4, maxLength: 60 }),
        fc.integer({ min: 0, max: 4 }),
        (points, power) => {
          const y = points.map(([value]) => value);
          const weights = points.map(([, w]) => w);
          weights[0] = weights[weights.length - 1] = 1;
          const lambda = 10 ** power;
          expect(
            relativeDistance(smooth(y, weights, lambda), denseWhittaker(y, weights, lambda))
          ).toBeLessThan(1e-7);
        }
      ),
      { numRuns: 200 }
    );
  });

  it('leaves a straight line as it is, whatever the weights and the smoothness', () => {
    const line = Array.from({ length: 300 }, (_, i) => 12 - 0.25 * i);
    for (const lambda of [1, 1e5, 1e8]) {
      const weights = line.map((_, i) => (i % 3 === 0 ? 0.01 : 1));
      expect(relativeDistance(smooth(line, weights, lambda), line)).toBeLessThan(1e-6);
    }
  });

  it('gives the mirrored result for mirrored values', () => {
    const y = [...rippledCurve().intensity].slice(0, 61);
    const ones = y.map(() => 1);
    const forth = smooth(y, ones, 1000);
    const back = smooth([...y].reverse(), ones, 1000);
    expect(relativeDistance([...back].reverse(), forth)).toBeLessThan(1e-12);
  });
});
