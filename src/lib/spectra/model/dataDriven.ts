import { chiSquaredQuantile, fQuantile } from '../statistics/quantiles';
import { assertSignificance } from './limits';

/**
 * Scaled chi-squared description of a set of distances: distance * dof / mean follows chi-squared with `dof`
 * degrees of freedom. One such for the score distances h (T2), one for the orthogonal distances q (Q).
 */
export interface ScaledChiSquared {
  readonly mean: number;
  readonly dof: number;
}

/** More degrees of freedom than this change no limit by as much as the estimate is uncertain. */
const MOST_DOF = 250;

/**
 * Classical moments (Pomerantsev, J. Chemometrics 22:601, 2008): mean u0 and N = round(2 (u0/s)^2), s with
 * divisor n - 1. At least one degree of freedom.
 */
export function classicalMoments(distances: ArrayLike<number>): ScaledChiSquared {
  const { mean, variance } = moments(distances);
  if (!(mean > 0)) return { mean: 0, dof: 1 };
  if (!(variance > 0)) return { mean, dof: MOST_DOF };
  return { mean, dof: clampDof(Math.round((2 * mean * mean) / variance)) };
}

/**
 * Robust estimates from median and inter-quartile range (Pomerantsev & Rodionova, J. Chemometrics 28:518,
 * 2014), for a set that may hold outliers: N = round(exp((1.380948 ln(2.68631 / R))^1.185785)) with
 * R = IQR / median, u0 = N/2 (median/chi2(.5) + IQR/(chi2(.75) - chi2(.25))).
 */
export function robustMoments(distances: ArrayLike<number>): ScaledChiSquared {
  const sorted = Float64Array.from(distances).sort();
  const median = quantileOf(sorted, 0.5);
  if (!(median > 0)) return { mean: 0, dof: 1 };
  const spread = quantileOf(sorted, 0.75) - quantileOf(sorted, 0.25);
  const dof = robustDof(spread / median);
  const byMedian = median / chiSquaredQuantile(0.5, dof);
  const bySpread = spread / (chiSquaredQuantile(0.75, dof) - chiSquaredQuantile(0.25, dof));
  return { mean: (dof / 2) * (byMedian + bySpread), dof };
}

function robustDof(ratio: number): number {
  if (ratio > 2.685592117) return 1;
  if (ratio < 0.194565995) return 100;
  return clampDof(Math.round(Math.exp(Math.pow(1.380948 * Math.log(2.68631 / ratio), 1.185785))));
}

/** Full distance f = Nh h/h0 + Nq q/q0; chi-squared with Nh + Nq degrees of freedom for genuine spectra. */
export function fullDistance(
  h: number,
  q: number,
  score: ScaledChiSquared,
  residual: ScaledChiSquared
): number {
  return (score.dof * h) / score.mean + (residual.dof * q) / residual.mean;
}

/** Limit of the full distance at a significance. */
export function fullDistanceLimit(
  score: ScaledChiSquared,
  residual: ScaledChiSquared,
  significance: number
): number {
  assertSignificance(significance);
  return chiSquaredQuantile(1 - significance, score.dof + residual.dof);
}

/** Limit of one distance alone: u0/N chi2(1-a; N). */
export function scaledChiSquaredLimit(fit: ScaledChiSquared, significance: number): number {
  assertSignificance(significance);
  return (fit.mean / fit.dof) * chiSquaredQuantile(1 - significance, fit.dof);
}

/**
 * The same for few distances, with allowance for how little they say. The degrees of freedom, N = 2 (u0/s)^2
 * as above, are lowered by about one standard error, sqrt((2 + 12/N)/n) of themselves; and since
 * u0 is itself a mean of n such distances, u0/N chi2(N) gives way to u0 F(N, nN). On simulated classes (white
 * and correlated noise, 1 to 4 components) a 1 % limit from held-out distances then rejects 1.5 to 3 % of
 * genuine new spectra at 12 references and up to 5 % at 5, where the plain form rejects up to 6 and 11 %.
 *
 * @param count how many of the distances are independent: sources, not replicates
 */
export function fewDistancesLimit(distances: ArrayLike<number>, count: number, significance: number): number {
  assertSignificance(significance);
  const { mean, variance } = moments(distances);
  if (!(mean > 0)) return 0;
  const plain = variance > 0 ? (2 * mean * mean) / variance : MOST_DOF;
  const dof = clampDof(plain / (1 + Math.sqrt((2 + 12 / plain) / count)));
  return mean * fQuantile(1 - significance, dof, count * dof);
}

/**
 * Box's limit of Q from the fitted spectra's own Q values (Nomikos & MacGregor 1995): g chi2(1-a; h) with
 * g = s^2/2m, h = 2m^2/s^2, s with divisor n - 1.
 * @param wholeDegrees round h down to a whole number, as some published tables do
 */
export function boxLimit(q: ArrayLike<number>, significance: number, wholeDegrees = false): number {
  assertSignificance(significance);
  const { mean, variance } = moments(q);
  const g = variance / (2 * mean);
  const h = (2 * mean * mean) / variance;
  return g * chiSquaredQuantile(1 - significance, wholeDegrees ? Math.max(1, Math.floor(h)) : h);
}

/** Mean, and variance with divisor n - 1. */
function moments(values: ArrayLike<number>): { mean: number; variance: number } {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i];
  const mean = sum / values.length;
  let squares = 0;
  for (let i = 0; i < values.length; i++) squares += (values[i] - mean) * (values[i] - mean);
  return { mean, variance: squares / (values.length - 1) };
}

/** Sample quantile by linear interpolation between order statistics (Hyndman & Fan type 7). */
function quantileOf(sorted: Float64Array, p: number): number {
  const position = (sorted.length - 1) * p;
  const below = Math.floor(position);
  const above = Math.min(below + 1, sorted.length - 1);
  return sorted[below] + (position - below) * (sorted[above] - sorted[below]);
}

function clampDof(dof: number): number {
  return Math.min(MOST_DOF, Math.max(1, dof));
}
