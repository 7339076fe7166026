import type { ClassLimits, ClassModel } from './classModel';
import { nonconformity } from './conformal';
import { classicalMoments, scaledChiSquaredLimit } from './dataDriven';
import { leaveOneOut, leaveSourceOut, type HeldOutDistances } from './leaveOneOut';
import { assertSignificance, jacksonMudholkarLimit, t2Limit } from './limits';
import { pca } from './pca';

export interface ClassModelOptions {
  /** Components wanted; fewer are kept when the references do not carry as many. At least 1. */
  readonly components: number;
  /** Significance of both limits, e.g. 0.01. */
  readonly significance: number;
  /** Lot or instrument of each reference, same order. Absent: each reference is its own source. */
  readonly sources?: readonly string[];
}

export interface FittedClass {
  readonly model: ClassModel;
  /** Distances of each reference under the model fitted without its source, in row order. */
  readonly heldOut: HeldOutDistances;
  /** `nonconformity` of the held-out references, ascending: what a conformal p-value is taken from. */
  readonly heldOutNonconformity: readonly number[];
  /** Plain sentences the method owner must read. Empty when there is nothing to say. */
  readonly cautions: readonly string[];
}

/** From this many references on, the theoretical limits are used; below, those drawn from held-out data. */
const LARGE_SET = 30;

/**
 * Fits the class model of one material and sets its limits.
 * @param rows references after the recipe: at least 3, equal length
 * @throws RangeError when there are too few, lengths differ, or all are the same spectrum
 */
export function fitClassModel(rows: readonly Float64Array[], options: ClassModelOptions): FittedClass {
  assertSignificance(options.significance);
  if (rows.length < 3) throw new RangeError(`A class model needs at least 3 references; there are ${rows.length}.`);
  const wanted = Math.max(1, Math.floor(options.components));
  const fit = pca(rows, Math.min(wanted, rows.length - 2));
  const kept = fit.loadings.length;
  if (kept === 0) throw new RangeError('All references are the same spectrum: there is no spread to model.');
  const sources = options.sources ?? rows.map((_, i) => String(i));
  const sourceCount = new Set(sources).size;
  const heldOut = sourceCount >= 2 ? leaveSourceOut(fit, sources, kept) : leaveOneOut(fit, kept);
  const residual = fit.eigenvalues.subarray(kept);
  const limits = chooseLimits(rows.length, kept, residual, heldOut, options.significance);
  const model: ClassModel = {
    mean: Array.from(fit.mean),
    loadings: fit.loadings.map((loading) => Array.from(loading)),
    eigenvalues: Array.from(fit.eigenvalues.subarray(0, kept)),
    residualEigenvalues: Array.from(residual),
    n: rows.length,
    limits
  };
  const scores = Array.from(heldOut.t2, (t2, i) => nonconformity(t2, heldOut.q[i], limits));
  return {
    model,
    heldOut,
    heldOutNonconformity: scores.sort((a, b) => a - b),
    cautions: []
  };
}

function chooseLimits(
  n: number,
  components: number,
  residual: ArrayLike<number>,
  heldOut: HeldOutDistances,
  significance: number
): ClassLimits {
  if (n >= LARGE_SET) {
    return {
      significance,
      t2: t2Limit('F, new object', n, components, significance),
      t2Form: 'F, new object',
      q: jacksonMudholkarLimit(residual, significance).limit,
      qForm: 'Jackson-Mudholkar'
    };
  }
  return {
    significance,
    t2: scaledChiSquaredLimit(classicalMoments(heldOut.t2), significance),
    t2Form: 'data-driven chi-squared',
    q: scaledChiSquaredLimit(classicalMoments(heldOut.q), significance),
    qForm: 'data-driven chi-squared'
  };
}
