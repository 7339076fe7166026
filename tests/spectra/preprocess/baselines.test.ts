import { describe, expect, it } from 'vitest';
import { airpls, fitAdaptive } from '$lib/spectra/preprocess/adaptiveReweighted';
import { asymmetricLeastSquares, fitAsymmetric } from '$lib/spectra/preprocess/asymmetricLeastSquares';
import { arpls, fitReweighted } from '$lib/spectra/preprocess/asymmetricReweighted';
import { fitPolynomial, polynomialBaseline } from '$lib/spectra/preprocess/polynomialBaseline';
import { dropRanges } from '$lib/spectra/preprocess/ranges';
import { applyStep, stepSpec } from '$lib/spectra/preprocess/steps';
import { whittaker } from '$lib/spectra/preprocess/whittaker';
import {
  denseAirpls,
  denseArpls,
  denseAsymmetric,
  denseModifiedPolynomial
} from '../../support/denseBaselines';
import { lorentzians } from '../../support/madeSpectra';
import { onUniformAxis, relativeDistance } from '../../support/preprocessCurve';

/** Two bands on a bent background with noise: 150 points, small enough for dense matrices. */
const noisy = lorentzians(
  { from: 800, to: 949, step: 1 },
  [
    { centreCm1: 840, height: 900, fwhmCm1: 8 },
    { centreCm1: 905, height: 400, fwhmCm1: 12 },
    { centreCm1: 870, height: 600, fwhmCm1: 300 }
  ],
  { sd: 8, seed: 4 }
);
const y = [...noisy.intensity];

/** The paper's rounds on the product's smoother, started from equal weights. */
function fromEqualWeights(values: Float64Array, lambda: number, p: number, z: Float64Array): number {
  let weights = new Float64Array(values.length).fill(1);
  for (let round = 1; ; round++) {
    whittaker(values, weights, lambda, z);
    const next = values.map((value, i) => (value > z[i] ? p : 1 - p));
    if (next.every((weight, i) => weight === weights[i])) return round;
    weights = next;
  }
}

const BASELINES = ['asymmetric-least-squares', 'airpls', 'arpls', 'polynomial-baseline'] as const;

describe('baselines agree with the papers written out in dense matrices', () => {
  const z = new Float64Array(y.length);

  it('asymmetric least squares, at several settings', () => {
    for (const [lambda, asymmetry] of [
      [100, 0.001],
      [1e4, 0.01],
      [1e6, 0.05]
    ]) {
      const rounds = fitAsymmetric(noisy.intensity, z, { lambda, asymmetry, maxIterations: 100 });
      expect(rounds).toBeLessThan(20);
      // Forty rounds of the reference from equal weights: it has long settled too.
      expect(relativeDistance(z, denseAsymmetric(y, lambda, asymmetry, 40))).toBeLessThan(1e-6);
    }
  });

  it('asymmetric least squares ends on the same bits as from the equal weights of its paper', () => {
    for (let seed = 1; seed <= 12; seed++) {
      const bands = [600, 900, 1400].map((centreCm1) => ({
        centreCm1,
        height: 100 * seed,
        fwhmCm1: 10 + 20 * seed
      }));
      const { intensity } = lorentzians({ from: 300, to: 1800, step: 1 }, bands, { sd: 10, seed });
      for (const lambda of [1e3, 1e5, 1e7]) {
        const quick = new Float64Array(intensity.length);
        const options = { lambda, asymmetry: 0.01, maxIterations: 200 };
        const rounds = fitAsymmetric(intensity, quick, options);
        const plain = new Float64Array(intensity.length);
        expect(rounds).toBeLessThanOrEqual(fromEqualWeights(intensity, lambda, 0.01, plain));
        expect([...quick]).toEqual([...plain]);
      }
    }
  });

  it('airPLS', () => {
    for (const lambda of [100, 1e4, 1e6]) {
      fitAdaptive(noisy.intensity, z, { lambda, maxIterations: 20 });
      expect(relativeDistance(z, denseAirpls(y, lambda, 20))).toBeLessThan(1e-6);
    }
  });

  it('arPLS', () => {
    for (const lambda of [1e3, 1e5]) {
      fitReweighted(noisy.intensity, z, { lambda, tolerance: 1e-4, maxIterations: 200 });
      expect(relativeDistance(z, denseArpls(y, lambda, 1e-4))).toBeLessThan(1e-6);
    }
  });

  it('modified polynomial', () => {
    for (const order of [0, 1, 3, 6]) {
      const fit = fitPolynomial(noisy.shiftCm1, noisy.intensity, {
        order,
        tolerance: 1e-12,
        maxIterations: 40
      });
      expect(relativeDistance(fit, denseModifiedPolynomial(y, order, 40))).toBeLessThan(1e-6);
    }
  });
});

describe.each(BASELINES)('%s', (name) => {
  const run = (spectrum: typeof noisy) => applyStep(spectrum, stepSpec(name), {});

  it('takes a bent background off and leaves the bands standing', () => {
    const made = lorentzians({ from: 300, to: 1800, step: 1 }, [
      { centreCm1: 1000, height: 1000, fwhmCm1: 10 }
    ]);
    const bent = made.intensity.map((value, i) => value + 200 + 0.4 * i - 0.0002 * i * i);
    const { intensity } = run({ shiftCm1: made.shiftCm1, intensity: bent });
    expect(intensity[700]).toBeGreaterThan(850);
    expect(intensity[700]).toBeLessThan(1050);
    for (const i of [100, 300, 500, 1000, 1400]) expect(Math.abs(intensity[i])).toBeLessThan(40);
  });

  it('turns a constant spectrum into exactly zero, so that scaling can refuse it', () => {
    const { intensity } = run(onUniformAxis(new Array<number>(64).fill(12345.6789)));
    expect([...intensity].every((value) => value === 0)).toBe(true);
  });

  it('returns at its limit of rounds', () => {
    const spec = stepSpec(name);
    const once = applyStep(noisy, { ...spec, options: { ...spec.options, maxIterations: 1 } }, {});
    expect(once.intensity.every(Number.isFinite)).toBe(true);
    expect(once.intensity).not.toEqual(run(noisy).intensity);
  });
});

it('airPLS stops after fewer rounds on a high background, by its paper: its stop rule looks at the whole signal', () => {
  const z = new Float64Array(y.length);
  const options = { lambda: 1e4, maxIterations: 20 };
  const low = fitAdaptive(noisy.intensity, z, options);
  const high = fitAdaptive(
    noisy.intensity.map((value) => value + 1e6),
    z,
    options
  );
  expect(high).toBeLessThan(low);
  // The same values with the background told apart stop at the same round.
  expect(fitAdaptive(noisy.intensity, z, options, 1e6)).toBe(high);
});

describe('baselines where ranges were dropped', () => {
  const cut = dropRanges.apply(noisy, { ranges: [{ fromCm1: 860, toCm1: 880 }] }, {});

  it.each([asymmetricLeastSquares, airpls, arpls])('$name treats each piece alone', (step) => {
    const piece = (from: number, to: number) => ({
      shiftCm1: cut.shiftCm1.slice(from, to),
      intensity: cut.intensity.slice(from, to)
    });
    const run = (spectrum: typeof cut) => applyStep(spectrum, stepSpec(step.name), {}).intensity;
    expect([...run(cut)]).toEqual([...run(piece(0, 60)), ...run(piece(60, cut.shiftCm1.length))]);
  });

  it('the polynomial is one function of the shift over all pieces', () => {
    const parabola = cut.shiftCm1.map((x) => 3 + 0.01 * (x - 850) * (x - 850));
    const { intensity } = polynomialBaseline.apply(
      { shiftCm1: cut.shiftCm1, intensity: parabola },
      { order: 2, tolerance: 1e-6, maxIterations: 50 },
      {}
    );
    expect(Math.max(...intensity.map(Math.abs))).toBeLessThan(1e-9);
  });

  it('a piece too short, an uneven axis and too few points are refused in words', () => {
    const sliver = dropRanges.apply(noisy, { ranges: [{ fromCm1: 803, toCm1: 880 }] }, {});
    const uneven = { ...noisy, shiftCm1: noisy.shiftCm1.map((x, i) => x + 0.001 * i * i) };
    for (const step of [asymmetricLeastSquares, airpls, arpls]) {
      const run = (spectrum: typeof noisy) => () => applyStep(spectrum, stepSpec(step.name), {});
      expect(run(sliver)).toThrow(expect.objectContaining({ code: 'too-few-points' }));
      expect(run(uneven)).toThrow(expect.objectContaining({ code: 'axis-not-uniform' }));
    }
    const six = onUniformAxis([1, 2, 3, 4, 5, 6]);
    expect(() => applyStep(six, stepSpec('polynomial-baseline'), {})).toThrow(
      expect.objectContaining({ code: 'too-few-points' })
    );
  });
});
