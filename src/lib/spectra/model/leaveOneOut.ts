import type { Pca } from './pca';
import { downdatedPairs } from './secularRoots';
import { symmetricEigen } from './symmetricEigen';

/** T2 and Q of each spectrum under the model fitted without it (and without its source), in row order. */
export interface HeldOutDistances {
  readonly t2: Float64Array;
  readonly q: Float64Array;
  /** Components the held-out models kept: fewer than asked where a fold was too small. */
  readonly components: number;
}

/**
 * Leave-one-out T2 and Q of every reference, at about no cost beside the fit itself.
 *
 * In the coordinates of the fitted components the scatter of the others about their own mean is
 * S^2 - n/(n-1) z z', with z the scores of the one left out: a rank-one downdate of a diagonal matrix, whose
 * leading eigenpairs come from the secular equation. Nothing of length p is touched.
 */
export function leaveOneOut(fit: Pca, components: number): HeldOutDistances {
  const { n, eigen, eigenvalues } = fit;
  const rank = eigenvalues.length;
  const kept = Math.max(0, Math.min(components, rank - 1, n - 2));
  const poles = eigen.values.subarray(0, rank);
  const t2 = new Float64Array(n);
  const q = new Float64Array(n);
  const z = new Float64Array(rank);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < rank; k++) z[k] = Math.sqrt(poles[k]) * eigen.vectors[k * n + i];
    const others = downdatedPairs(poles, z, n / (n - 1), kept);
    // The one left out stands n/(n-1) times as far from the others' mean as from the mean of all.
    for (let k = 0; k < rank; k++) z[k] *= n / (n - 1);
    for (let k = 0; k < kept; k++) {
      const vector = others.vectors.subarray(k * rank, (k + 1) * rank);
      let score = 0;
      for (let j = 0; j < rank; j++) score += z[j] * vector[j];
      for (let j = 0; j < rank; j++) z[j] -= score * vector[j];
      t2[i] += (score * score * (n - 2)) / others.values[k];
    }
    for (let j = 0; j < rank; j++) q[i] += z[j] * z[j];
  }
  return { t2, q, components: kept };
}

/**
 * The same with whole sources left out together: replicates of one lot vouch for each other, so a spectrum
 * must be judged by a model that has seen none of its lot. Refits through the double-centred Gram matrix of
 * the rows that stay, exactly.
 *
 * @param sources lot or instrument of each row, same length and order as the rows of the fit
 * @throws RangeError when there are fewer than two sources
 */
export function leaveSourceOut(fit: Pca, sources: readonly string[], components: number): HeldOutDistances {
  const folds = foldsBySource(sources, fit.n);
  if (folds.length < 2) throw new RangeError('Leaving a source out needs at least two sources.');
  if (folds.length === fit.n) return leaveOneOut(fit, components);
  const largest = Math.max(...folds.map((fold) => fold.length));
  const kept = Math.max(0, Math.min(components, fit.eigenvalues.length, fit.n - largest - 1));
  const t2 = new Float64Array(fit.n);
  const q = new Float64Array(fit.n);
  for (const fold of folds) heldOutFold(fit, fold, kept, t2, q);
  return { t2, q, components: kept };
}

/** Row indices of each source, in order of first appearance. */
export function foldsBySource(sources: readonly string[], n: number): number[][] {
  if (sources.length !== n) throw new RangeError(`There are ${n} spectra but ${sources.length} sources.`);
  const folds = new Map<string, number[]>();
  sources.forEach((source, row) => {
    const fold = folds.get(source);
    if (fold) fold.push(row);
    else folds.set(source, [row]);
  });
  return [...folds.values()];
}

function heldOutFold(
  fit: Pca,
  fold: readonly number[],
  kept: number,
  t2: Float64Array,
  q: Float64Array
): void {
  const { n } = fit;
  const gram = fit.centred.gram;
  const out = new Set(fold);
  const stay = Array.from({ length: n }, (_, i) => i).filter((i) => !out.has(i));
  const m = stay.length;
  const rowMean = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    for (const j of stay) rowMean[i] += gram[i * n + j];
    rowMean[i] /= m;
  }
  let grandMean = 0;
  for (const i of stay) grandMean += rowMean[i];
  grandMean /= m;
  const inner = (i: number, j: number) => gram[i * n + j] - rowMean[i] - rowMean[j] + grandMean;

  const centred = new Float64Array(m * m);
  for (let a = 0; a < m; a++) for (let b = 0; b < m; b++) centred[a * m + b] = inner(stay[a], stay[b]);
  const { values, vectors } = symmetricEigen(centred, m);
  for (const row of fold) {
    let rest = inner(row, row);
    for (let k = 0; k < kept && values[k] > 0; k++) {
      let along = 0;
      for (let a = 0; a < m; a++) along += inner(row, stay[a]) * vectors[k * m + a];
      const squaredScore = (along * along) / values[k];
      t2[row] += (squaredScore * (m - 1)) / values[k];
      rest -= squaredScore;
    }
    q[row] = Math.max(0, rest);
  }
}
