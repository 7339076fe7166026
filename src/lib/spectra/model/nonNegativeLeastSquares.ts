import { dot } from '../compare/dotProducts';

export interface Shares {
  /** Coefficient of each component, at least 0, in the units of the components as given. */
  readonly coefficients: readonly number[];
  /** Coefficients divided by their sum; all 0 when nothing fits. */
  readonly shares: readonly number[];
  /** Standard error of each share; 0 for a component held at the bound. */
  readonly standardErrors: readonly number[];
  /** Length of what is left, relative to the length of the spectrum. */
  readonly relativeResidual: number;
}

/** Above this the exact search over subsets of components would no longer be quick. */
const MOST_COMPONENTS = 8;

/** A component that is this nearly a combination of others adds nothing that can be told apart. */
const COLLINEAR = 1e-10;

/** What lies under the components and belongs to none of them; fitted with either sign and then set aside. */
export type ShareBackground = 'none' | 'constant' | 'line';

/**
 * Shares of a few known components in a spectrum: the exact minimum of |y - sum c_k x_k|^2 with every c_k at
 * least 0. With so few components every subset is solved and the best feasible one kept, which is exact and
 * cannot cycle; components that cannot be told apart from others of the subset drop out of it.
 *
 * Standard errors come from the residual with allowance for its correlation from point to point (residuals of
 * spectra are smooth, so neighbouring points are not independent evidence): its variance is raised by
 * (1 + a)/(1 - a), a the lag-one correlation. They do not cover a component that is missing from the list.
 *
 * @param spectrum after the same treatment as the components; a linear one (not scaled spectrum by spectrum)
 *   if the shares are to be amounts rather than an indication
 * @param components 1 to 8, same length as the spectrum, each scaled as one unit of its material
 * @param background a constant by default: an offset left by a baseline or a dark signal moves shares by several
 *   percent when it is not allowed for
 */
export function nonNegativeShares(
  spectrum: Float64Array,
  components: readonly Float64Array[],
  background: ShareBackground = 'constant'
): Shares {
  // Least squares with a free background is least squares on what is left when the background is taken out of
  // the spectrum and of each component (Frisch & Waugh).
  return sharesOf(
    withoutBackground(spectrum, background),
    components.map((component) => withoutBackground(component, background))
  );
}

function withoutBackground(values: Float64Array, background: ShareBackground): Float64Array {
  if (background === 'none') return values;
  const points = values.length;
  const middle = (points - 1) / 2;
  let sum = 0;
  let tilt = 0;
  for (let j = 0; j < points; j++) {
    sum += values[j];
    tilt += values[j] * (j - middle);
  }
  const mean = sum / points;
  const slope = background === 'line' ? tilt / ((points * (points * points - 1)) / 12) : 0;
  return values.map((value, j) => value - mean - slope * (j - middle));
}

function sharesOf(spectrum: Float64Array, components: readonly Float64Array[]): Shares {
  const count = components.length;
  if (count < 1 || count > MOST_COMPONENTS) {
    throw new RangeError(`Shares can be found for 1 to ${MOST_COMPONENTS} components; there are ${count}.`);
  }
  const cross = components.map((a) => components.map((b) => dot(a, b)));
  const right = components.map((a) => dot(a, spectrum));
  const total = dot(spectrum, spectrum);
  let best: { members: number[]; solution: Solution; left: number } | null = null;
  for (let subset = 1; subset < 1 << count; subset++) {
    const members = components.map((_, k) => k).filter((k) => (subset >> k) & 1);
    const solution = solveSubset(cross, right, members);
    if (solution === null || solution.coefficients.some((c) => c <= 0)) continue;
    const left = total - members.reduce((sum, k, i) => sum + solution.coefficients[i] * right[k], 0);
    if (best === null || left < best.left) best = { members, solution, left };
  }
  const coefficients = new Array<number>(count).fill(0);
  if (best === null) {
    const none = new Array<number>(count).fill(0);
    return { coefficients, shares: none, standardErrors: none, relativeResidual: total > 0 ? 1 : 0 };
  }
  best.members.forEach((k, i) => (coefficients[k] = best.solution.coefficients[i]));
  const residual = residualOf(spectrum, components, coefficients);
  const sum = coefficients.reduce((a, b) => a + b, 0);
  return {
    coefficients,
    shares: coefficients.map((c) => c / sum),
    standardErrors: shareErrors(best.members, best.solution, residual, coefficients, sum),
    relativeResidual: Math.sqrt(dot(residual, residual) / total)
  };
}

interface Solution {
  readonly coefficients: readonly number[];
  /** Inverse of the normal matrix of the subset. */
  readonly inverse: readonly (readonly number[])[];
}

/** Normal equations of a subset by Gauss-Jordan on a positive definite matrix; null when it is near singular. */
function solveSubset(
  cross: readonly (readonly number[])[],
  right: readonly number[],
  members: readonly number[]
): Solution | null {
  const size = members.length;
  const work = members.map((row, i) => [
    ...members.map((column) => cross[row][column]),
    ...members.map((_, j) => (i === j ? 1 : 0))
  ]);
  for (let k = 0; k < size; k++) {
    const pivot = work[k][k];
    if (!(pivot > COLLINEAR * cross[members[k]][members[k]])) return null;
    for (let j = 0; j < 2 * size; j++) work[k][j] /= pivot;
    for (let i = 0; i < size; i++) {
      if (i === k) continue;
      const factor = work[i][k];
      for (let j = 0; j < 2 * size; j++) work[i][j] -= factor * work[k][j];
    }
  }
  const inverse = work.map((row) => row.slice(size));
  const coefficients = inverse.map((row) =>
    row.reduce((sum, value, j) => sum + value * right[members[j]], 0)
  );
  return { coefficients, inverse };
}

function residualOf(
  spectrum: Float64Array,
  components: readonly Float64Array[],
  coefficients: readonly number[]
): Float64Array {
  const residual = Float64Array.from(spectrum);
  components.forEach((component, k) => {
    if (coefficients[k] === 0) return;
    for (let j = 0; j < residual.length; j++) residual[j] -= coefficients[k] * component[j];
  });
  return residual;
}

/** Delta method: share_k = c_k / sum, d share_k / d c_l = ([k = l] - share_k) / sum. */
function shareErrors(
  members: readonly number[],
  solution: Solution,
  residual: Float64Array,
  coefficients: readonly number[],
  sum: number
): number[] {
  const errors = new Array<number>(coefficients.length).fill(0);
  const variance = residualVariance(residual, members.length);
  members.forEach((k, i) => {
    const slope = members.map((_, j) => ((i === j ? 1 : 0) - coefficients[k] / sum) / sum);
    let quadratic = 0;
    for (let a = 0; a < slope.length; a++) {
      for (let b = 0; b < slope.length; b++) quadratic += slope[a] * solution.inverse[a][b] * slope[b];
    }
    errors[k] = Math.sqrt(Math.max(0, variance * quadratic));
  });
  return errors;
}

function residualVariance(residual: Float64Array, fitted: number): number {
  const squares = dot(residual, residual);
  if (squares === 0) return 0;
  let lagged = 0;
  for (let j = 1; j < residual.length; j++) lagged += residual[j] * residual[j - 1];
  const correlation = Math.min(0.99, Math.max(0, lagged / squares));
  const degrees = Math.max(1, residual.length - fitted);
  return ((squares / degrees) * (1 + correlation)) / (1 - correlation);
}
