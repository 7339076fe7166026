import { z } from 'zod';
import { maxIterationsOption } from './baselineOptions';
import { numberOption, wholeOption } from './option';
import { StepRefusal, type PreprocessStep } from './step';

/**
 * Baseline by modified polynomial fitting: Lieber & Mahadevan-Jansen, Applied Spectroscopy 57:1363 (2003). A
 * least-squares polynomial in the shift is fitted, every point above it is cut down to it, and the fit is repeated
 * on the cut curve, until no point is cut by more than `tolerance` of the curve's first height range, or for
 * `maxIterations` rounds. Rounds are slow to settle by nature; the paper reports 25 to 200.
 *
 * The polynomial is a function of the shift, not of neighbouring points: one fit serves all segments, and the axis
 * need not be uniform. Points dropped earlier simply take no part.
 */
const options = z.strictObject({
  order: wholeOption({
    title: 'Order of the polynomial',
    description: 'Larger orders follow more curvature, and more of broad bands.',
    min: 0,
    max: 9
  }),
  tolerance: numberOption({
    title: 'Stop when points are cut by less than',
    description: 'Fraction of the height range of the spectrum; larger values stop earlier.',
    min: 1e-6,
    max: 0.1
  }),
  maxIterations: maxIterationsOption
});

type PolynomialOptions = z.output<typeof options>;

export const polynomialBaseline: PreprocessStep<'polynomial-baseline', typeof options> = {
  name: 'polynomial-baseline',
  version: 1,
  kind: 'baseline',
  title: 'Baseline, modified polynomial',
  source: 'Lieber & Mahadevan-Jansen, Appl. Spectrosc. 57:1363 (2003)',
  options,
  defaults: { order: 5, tolerance: 1e-3, maxIterations: 100 },
  apply({ shiftCm1, intensity }, chosen) {
    const n = intensity.length;
    if (n <= chosen.order + 1) {
      const message = `The spectrum has ${n} points; a polynomial of order ${chosen.order} needs more than ${chosen.order + 1}.`;
      throw new StepRefusal('too-few-points', message);
    }
    // As in the Whittaker baselines: a constant taken off first costs nothing and keeps digits.
    const y = new Float64Array(n);
    for (let i = 0; i < n; i++) y[i] = intensity[i] - intensity[0];
    const fit = fitPolynomial(shiftCm1, y, chosen);
    for (let i = 0; i < n; i++) y[i] -= fit[i];
    return { shiftCm1, intensity: y };
  }
};

/** The baseline of `y` at the shifts `x` (ascending, more points than order + 1). */
export function fitPolynomial(
  x: Float64Array,
  y: Float64Array,
  { order, tolerance, maxIterations }: PolynomialOptions
): Float64Array {
  const n = y.length;
  const basis = orthonormalPolynomials(x, order);
  const cut = y.slice();
  const fit = new Float64Array(n);
  let low = Infinity;
  let high = -Infinity;
  for (let i = 0; i < n; i++) {
    if (y[i] < low) low = y[i];
    if (y[i] > high) high = y[i];
  }
  const negligible = tolerance * (high - low);
  for (let round = 1; ; round++) {
    project(basis, cut, fit);
    if (round >= maxIterations) return fit;
    let largest = 0;
    for (let i = 0; i < n; i++) {
      const above = cut[i] - fit[i];
      if (above <= 0) continue;
      if (above > largest) largest = above;
      cut[i] = fit[i];
    }
    if (largest <= negligible) return fit;
  }
}

/** Least-squares fit of `y` on an orthonormal basis: sum of its projections. */
function project(basis: readonly Float64Array[], y: Float64Array, fit: Float64Array): void {
  const n = y.length;
  fit.fill(0);
  for (const q of basis) {
    let dot = 0;
    for (let i = 0; i < n; i++) dot += q[i] * y[i];
    for (let i = 0; i < n; i++) fit[i] += dot * q[i];
  }
}

/**
 * Polynomials of degree 0 to `order`, orthonormal over the points: powers of the shift, scaled to -1 … 1, made
 * orthogonal one after the other (modified Gram-Schmidt, twice over, which keeps full precision).
 */
function orthonormalPolynomials(x: Float64Array, order: number): Float64Array[] {
  const n = x.length;
  const centre = (x[0] + x[n - 1]) / 2;
  const half = (x[n - 1] - x[0]) / 2;
  const basis: Float64Array[] = [];
  for (let degree = 0; degree <= order; degree++) {
    const q = new Float64Array(n).fill(1);
    // x times the previous orthogonal polynomial spans the same space as the next power, and is better conditioned.
    if (degree > 0) for (let i = 0; i < n; i++) q[i] = ((x[i] - centre) / half) * basis[degree - 1][i];
    for (let pass = 0; pass < 2; pass++) {
      for (const earlier of basis) {
        let dot = 0;
        for (let i = 0; i < n; i++) dot += earlier[i] * q[i];
        for (let i = 0; i < n; i++) q[i] -= dot * earlier[i];
      }
    }
    let squares = 0;
    for (let i = 0; i < n; i++) squares += q[i] * q[i];
    const norm = Math.sqrt(squares);
    for (let i = 0; i < n; i++) q[i] /= norm;
    basis.push(q);
  }
  return basis;
}
