import { chooseLimits, limitCautions } from './chooseLimits';
import type { ClassModel } from './classModel';
import { nonconformity } from './conformal';
import { foldsBySource, leaveOneOut, leaveSourceOut, type HeldOutDistances } from './leaveOneOut';
import { assertSignificance } from './limits';
import { pca } from './pca';

export interface ClassModelOptions {
  /** Components wanted, at least 1; fewer are kept when the references do not carry as many. */
  readonly components: number;
  /** Significance of both limits, e.g. 0.01. */
  readonly significance: number;
  /** Lot or instrument of each reference, same order. Absent: each reference is its own source. */
  readonly sources?: readonly string[];
}

export interface FittedClass {
  readonly model: ClassModel;
  /**
   * Distances of each reference under a model fitted without its source, in row order; without the reference
   * alone where all share one source or too little would stay.
   */
  readonly heldOut: HeldOutDistances;
  /** `nonconformity` of the held-out references, ascending: what a conformal p-value is taken from. */
  readonly heldOutNonconformity: readonly number[];
  /** Plain sentences the method owner must read. Empty when there is nothing to say. */
  readonly cautions: readonly string[];
}

/**
 * Fits the class model of one material and sets its limits.
 * @param rows references after the recipe: at least 4, equal length
 * @throws RangeError when there are too few, lengths differ, or all are the same spectrum
 */
export function fitClassModel(rows: readonly Float64Array[], options: ClassModelOptions): FittedClass {
  assertSignificance(options.significance);
  const n = rows.length;
  if (n < 4) throw new RangeError(`A class model needs at least 4 references; there are ${n}.`);
  const wanted = Math.max(1, Math.floor(options.components));
  const sources = options.sources ?? rows.map((_, i) => String(i));
  const folds = foldsBySource(sources, n);
  const largest = Math.max(...folds.map((fold) => fold.length));
  // A held-out fold must leave at least 3 spectra, or its model has no spread to judge by.
  const bySource = n - largest >= 3;
  const fit = pca(rows, Math.min(wanted, bySource ? n - largest - 2 : n - 3));
  // One direction of spread at least must stay outside the model, for Q to have something to measure.
  const kept = Math.min(fit.loadings.length, fit.eigenvalues.length - 1);
  if (kept < 1) throw new RangeError('The references are too alike: they show no spread to model.');
  const heldOut = bySource ? leaveSourceOut(fit, sources, kept) : leaveOneOut(fit, kept);
  const residualEigenvalues = Array.from(fit.eigenvalues.subarray(kept));
  const evidence = { sourceCount: folds.length, components: kept, residualEigenvalues, heldOut };
  const limits = chooseLimits(evidence, options.significance);
  const model: ClassModel = {
    mean: Array.from(fit.mean),
    loadings: fit.loadings.slice(0, kept).map((loading) => Array.from(loading)),
    eigenvalues: Array.from(fit.eigenvalues.subarray(0, kept)),
    residualEigenvalues,
    n,
    limits
  };
  const scores = Array.from(heldOut.t2, (t2, i) => nonconformity(t2, heldOut.q[i], limits));
  return {
    model,
    heldOut,
    heldOutNonconformity: scores.sort((a, b) => a - b),
    cautions: limitCautions(n, folds.length, wanted, kept)
  };
}
