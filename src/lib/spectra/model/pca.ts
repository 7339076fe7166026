import { centredGram, type CentredGram } from './gram';
import { symmetricEigen, type SymmetricEigen } from './symmetricEigen';

/** Principal components of n spectra of p points about their mean. */
export interface Pca {
  readonly n: number;
  readonly points: number;
  /** Length p. */
  readonly mean: Float64Array;
  /** `kept` orthonormal rows of length p; the element largest in size is positive in each. */
  readonly loadings: readonly Float64Array[];
  /** All eigenvalues of the covariance (divisor n - 1), descending; length is the rank. */
  readonly eigenvalues: Float64Array;
  /** The full eigen-decomposition of the Gram matrix, from which leave-one-out results follow cheaply. */
  readonly eigen: SymmetricEigen;
  readonly centred: CentredGram;
}

/** Eigenvalues below this fraction of the largest are rounding, not variation. */
const RANK_TOLERANCE = 1e-13;

/**
 * Principal component analysis by the Gram matrix: G = Xc Xc' = U S^2 U', loadings = Xc' u / s.
 * Sign is fixed by making the element of each loading that is largest in size positive (the first such, on a
 * tie), so a model does not flip between builds.
 *
 * @param rows n spectra after the recipe, equal length p
 * @param components how many loadings to keep; no more than the rank is returned
 */
export function pca(rows: readonly Float64Array[], components: number): Pca {
  return pcaFromGram(centredGram(rows), components);
}

/** The same, from a Gram matrix already at hand. */
export function pcaFromGram(centred: CentredGram, components: number): Pca {
  const { n, points, mean } = centred;
  const eigen = symmetricEigen(centred.gram, n);
  const rank = numericalRank(eigen.values, Math.min(n - 1, points));
  const kept = Math.min(Math.max(0, Math.floor(components)), rank);
  const loadings: Float64Array[] = [];
  for (let k = 0; k < kept; k++) {
    const coefficients = eigen.vectors.subarray(k * n, (k + 1) * n);
    loadings.push(unitLoading(centred, coefficients, loadings));
  }
  const eigenvalues = new Float64Array(rank);
  for (let k = 0; k < rank; k++) eigenvalues[k] = eigen.values[k] / (n - 1);
  return { n, points, mean, loadings, eigenvalues, eigen, centred };
}

function numericalRank(values: Float64Array, most: number): number {
  let rank = 0;
  while (rank < most && values[rank] > RANK_TOLERANCE * values[0]) rank++;
  return rank;
}

/**
 * The combination of centred rows given by `coefficients`, made orthogonal to the loadings before it (twice:
 * once is not enough when eigenvalues differ by many orders), scaled to unit length, sign fixed.
 */
export function unitLoading(
  centred: CentredGram,
  coefficients: Float64Array,
  before: readonly Float64Array[]
): Float64Array {
  const { n, points } = centred;
  const loading = new Float64Array(points);
  for (let i = 0; i < n; i++) {
    const c = coefficients[i];
    const row = centred.centred.subarray(i * points, (i + 1) * points);
    for (let j = 0; j < points; j++) loading[j] += c * row[j];
  }
  for (let pass = 0; pass < 2; pass++) {
    normalise(loading);
    for (const other of before) removeFrom(loading, other);
  }
  normalise(loading);
  fixSign(loading);
  return loading;
}

function normalise(vector: Float64Array): void {
  let squares = 0;
  for (let j = 0; j < vector.length; j++) squares += vector[j] * vector[j];
  const length = Math.sqrt(squares);
  if (length === 0) return;
  for (let j = 0; j < vector.length; j++) vector[j] /= length;
}

function removeFrom(vector: Float64Array, unit: Float64Array): void {
  let along = 0;
  for (let j = 0; j < vector.length; j++) along += vector[j] * unit[j];
  for (let j = 0; j < vector.length; j++) vector[j] -= along * unit[j];
}

function fixSign(vector: Float64Array): void {
  let largest = 0;
  for (let j = 1; j < vector.length; j++) {
    if (Math.abs(vector[j]) > Math.abs(vector[largest])) largest = j;
  }
  if (vector[largest] >= 0) return;
  for (let j = 0; j < vector.length; j++) vector[j] = -vector[j];
}
