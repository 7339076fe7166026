import { betaQuantile, fQuantile, normalQuantile } from '../statistics/quantiles';

/**
 * Three answers are in print to "the" limit of Hotelling's T2 for A components fitted to n spectra; they
 * differ most when n is small, so every limit says which one it is:
 * - 'F, calibration set': A(n-1)/(n-A) F(1-a; A, n-A), as much software prints it;
 * - 'F, new object': A(n^2-1)/(n(n-A)) F(1-a; A, n-A), exact for a spectrum that took no part in the fit
 *   (NIST/SEMATECH e-Handbook 6.5.4.3.4);
 * - 'beta, member': (n-1)^2/n Beta(1-a; A/2, (n-A-1)/2), exact for a spectrum the model was fitted to.
 */
export type T2Form = 'F, calibration set' | 'F, new object' | 'beta, member';

/**
 * Limit of T2.
 * @param n spectra the model was fitted to
 * @param components A, at least 1 and less than n (less than n - 1 for the beta form)
 * @param significance chance that a genuine spectrum exceeds the limit, e.g. 0.01
 */
export function t2Limit(form: T2Form, n: number, components: number, significance: number): number {
  assertSignificance(significance);
  if (form === 'beta, member') {
    const beta = betaQuantile(1 - significance, components / 2, (n - components - 1) / 2);
    return ((n - 1) * (n - 1) * beta) / n;
  }
  const f = fQuantile(1 - significance, components, n - components);
  const factor = form === 'F, new object' ? ((n - 1) * (n + 1)) / n : n - 1;
  return ((components * factor) / (n - components)) * f;
}

/** Smallest h0 let through: at or below zero the power form has no meaning (long flat tails of eigenvalues). */
const SMALLEST_H0 = 0.001;

/**
 * Limit of Q after Jackson & Mudholkar (Technometrics 21:341, 1979), from the eigenvalues the model leaves out:
 * theta_i = sum lambda^i, h0 = 1 - 2 theta1 theta3 / (3 theta2^2),
 * Q = theta1 [ c sqrt(2 theta2 h0^2)/theta1 + 1 + theta2 h0 (h0 - 1)/theta1^2 ]^(1/h0).
 *
 * @param residualEigenvalues of the covariance (divisor n - 1), any order
 * @returns the limit and h0; a limit of 0 when nothing is left out
 */
export function jacksonMudholkarLimit(
  residualEigenvalues: ArrayLike<number>,
  significance: number
): { readonly limit: number; readonly h0: number } {
  assertSignificance(significance);
  let theta1 = 0;
  let theta2 = 0;
  let theta3 = 0;
  for (let i = 0; i < residualEigenvalues.length; i++) {
    const value = residualEigenvalues[i];
    theta1 += value;
    theta2 += value * value;
    theta3 += value * value * value;
  }
  if (theta1 === 0) return { limit: 0, h0: 1 };
  const h0 = Math.max(SMALLEST_H0, 1 - (2 * theta1 * theta3) / (3 * theta2 * theta2));
  const c = normalQuantile(1 - significance);
  const spread = (c * Math.sqrt(2 * theta2) * h0) / theta1;
  const bias = (theta2 * h0 * (h0 - 1)) / (theta1 * theta1);
  const base = spread + 1 + bias;
  return { limit: base > 0 ? theta1 * Math.pow(base, 1 / h0) : 0, h0 };
}

/**
 * Significance that keeps the chance of even one false outlier among n spectra at `gamma`
 * (Pomerantsev 2008): 1 - (1 - gamma)^(1/n). Feed it to any limit above to get its outlier limit.
 */
export function outlierSignificance(gamma: number, n: number): number {
  assertSignificance(gamma);
  return -Math.expm1(Math.log1p(-gamma) / n);
}

export function assertSignificance(significance: number): void {
  if (!(significance > 0 && significance < 1)) {
    throw new RangeError(`A significance lies between 0 and 1; this one is ${significance}.`);
  }
}
