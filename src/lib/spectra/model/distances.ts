import type { ClassModel } from './classModel';

/** A class model as typed arrays: made once, used for every scan. */
export interface PackedClassModel {
  readonly points: number;
  readonly mean: Float64Array;
  readonly loadings: readonly Float64Array[];
  readonly eigenvalues: Float64Array;
}

export interface ClassDistances {
  /** Hotelling T2, the score distance: sum of t^2 / lambda over the kept components. */
  readonly t2: number;
  /** Q, the orthogonal distance: squared length of what the model leaves unexplained. */
  readonly q: number;
}

/** Turns the stored form of a model into the working one. */
export function packClassModel(model: ClassModel): PackedClassModel {
  return {
    points: model.mean.length,
    mean: Float64Array.from(model.mean),
    loadings: model.loadings.map((loading) => Float64Array.from(loading)),
    eigenvalues: Float64Array.from(model.eigenvalues)
  };
}

/**
 * T2 and Q of one spectrum under a class model. The residual is formed point by point rather than as a
 * difference of sums of squares, so that a small Q keeps all its digits.
 *
 * @param spectrum after the method's recipe, length p
 * @param residual receives the residual spectrum (what the model leaves); pass one to avoid an allocation
 * @throws RangeError when the lengths differ
 */
export function classDistances(
  model: PackedClassModel,
  spectrum: Float64Array,
  residual: Float64Array = new Float64Array(model.points)
): ClassDistances {
  const { points, mean, loadings, eigenvalues } = model;
  if (spectrum.length !== points || residual.length !== points) {
    throw new RangeError(`classDistances: the model has ${points} points, the spectrum ${spectrum.length}`);
  }
  for (let j = 0; j < points; j++) residual[j] = spectrum[j] - mean[j];
  let t2 = 0;
  for (let k = 0; k < loadings.length; k++) {
    const loading = loadings[k];
    let score = 0;
    for (let j = 0; j < points; j++) score += residual[j] * loading[j];
    t2 += (score * score) / eigenvalues[k];
    for (let j = 0; j < points; j++) residual[j] -= score * loading[j];
  }
  let q = 0;
  for (let j = 0; j < points; j++) q += residual[j] * residual[j];
  return { t2, q };
}
