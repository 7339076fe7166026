import { describe, expect, it } from 'vitest';
import { fitAdaptive } from '$lib/spectra/preprocess/adaptiveReweighted';
import { fitAsymmetric } from '$lib/spectra/preprocess/asymmetricLeastSquares';
import { fitReweighted } from '$lib/spectra/preprocess/asymmetricReweighted';
import { fitPolynomial } from '$lib/spectra/preprocess/polynomialBaseline';
import { whittaker } from '$lib/spectra/preprocess/whittaker';
import { relativeDistance, rippledCurve } from '../support/preprocessCurve';

describe('Whittaker smoother, second-order differences', () => {
  // (I + lambda D'D) z = y for y = 0 0 0 10 0 0 0, solved independently to six places.
  it.each([
    { lambda: 1, expected: [-0.384615, 0.865385, 2.5, 4.038462, 2.5, 0.865385, -0.384615] },
    { lambda: 10, expected: [0.660658, 1.316597, 1.90647, 2.232552, 1.90647, 1.316597, 0.660658] }
  ])('the worked example at lambda $lambda', ({ lambda, expected }) => {
    const z = new Float64Array(7);
    whittaker(Float64Array.of(0, 0, 0, 10, 0, 0, 0), new Float64Array(7).fill(1), lambda, z);
    expected.forEach((value, i) => expect(z[i]).toBeCloseTo(value, 6));
  });
});

describe('asymmetric least squares, Eilers & Boelens 2005', () => {
  it('the worked example: lambda 10, p 0.01, 10 rounds', () => {
    const y = Float64Array.of(1, 1.2, 1.4, 5, 9, 5.2, 2.4, 2.6, 2.8, 3);
    const z = new Float64Array(10);
    fitAsymmetric(y, z, { lambda: 10, asymmetry: 0.01, maxIterations: 10 });
    // Computed independently to six places.
    const expected = [
      0.961765, 1.215873, 1.470019, 1.72267, 1.965361, 2.192905, 2.407148, 2.612944, 2.814439, 3.014499
    ];
    expected.forEach((value, i) => expect(z[i]).toBeCloseTo(value, 6));
  });
});

// The papers' equations in numpy 2.4.6 and scipy 1.17.1, printed by tests/spectra/preprocess/frozenFigures.py.
describe('baselines of one curve against another implementation', () => {
  const { shiftCm1, intensity } = rippledCurve();
  const z = new Float64Array(intensity.length);
  const AT = [0, 1, 29, 30, 60, 75, 90, 118, 119];
  const distance = (baseline: Float64Array, expected: readonly number[]) =>
    relativeDistance(
      AT.map((i) => baseline[i]),
      expected
    );

  it('asymmetric least squares to its end', () => {
    fitAsymmetric(intensity, z, { lambda: 1e4, asymmetry: 0.01, maxIterations: 200 });
    const expected = [
      55.27794954322821, 55.26043281054392, 54.82015528616238, 54.809529807694666, 57.39765695442496,
      61.56829708521227, 66.19131972638894, 75.15054446219166, 75.47523964457005
    ];
    expect(distance(z, expected)).toBeLessThan(1e-9);
  });

  it('airPLS, Zhang, Chen & Liang 2010', () => {
    fitAdaptive(intensity, z, { lambda: 1e4, maxIterations: 20 });
    const expected = [
      56.64812183644602, 56.55082694372959, 54.2208375751491, 54.175709376704916, 56.18729634853023,
      60.09279264486047, 65.49159110917087, 78.15179124363911, 78.63771547223045
    ];
    expect(distance(z, expected)).toBeLessThan(1e-9);
  });

  it('arPLS, Baek et al. 2015', () => {
    fitReweighted(intensity, z, { lambda: 1e4, tolerance: 1e-3, maxIterations: 200 });
    const expected = [
      58.083161718408384, 57.99036623852231, 55.60895806423225, 55.550678040819555, 57.50309212878494,
      61.65638207278815, 67.1021654342688, 79.80886498992378, 80.3058512516566
    ];
    expect(distance(z, expected)).toBeLessThan(1e-9);
  });

  it('modified polynomial, Lieber & Mahadevan-Jansen 2003, order 4, 50 rounds', () => {
    const fit = fitPolynomial(shiftCm1, intensity, { order: 4, tolerance: 1e-9, maxIterations: 50 });
    const expected = [
      50.162781278002726, 50.81030023903465, 54.844337637415336, 54.7440765851612, 54.65443575396255,
      58.912858156393696, 65.14464319468033, 69.31016791325791, 68.91837388376241
    ];
    expect(distance(fit, expected)).toBeLessThan(1e-9);
  });
});
