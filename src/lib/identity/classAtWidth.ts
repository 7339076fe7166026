import type { PackedClassModel } from '../spectra/model/distances';
import { broaden, broadenTreated } from './broaden';

/** A class model as an instrument of lower resolution would have it, with the direction of its mean. */
export interface ClassAtWidth {
  readonly model: PackedClassModel;
  /** Unit vector of the mean, orthogonal to every loading: what a change of amplitude looks like. */
  readonly along: Float64Array;
}

/**
 * Neighbouring points of a filtered spectrum share noise: about this many count as one. From the default filter, whose
 * noise is correlated over half its window.
 */
export const NOISE_RUN = 8;

/** Mean and loadings broadened, the loadings made orthonormal again; the spread along each is taken to stay. */
export function classAtWidth(model: PackedClassModel, gridCm1: Float64Array, widthCm1: number): ClassAtWidth {
  const mean = broadenTreated(model.mean, gridCm1, widthCm1).values;
  const loadings: Float64Array[] = [];
  for (const loading of model.loadings) {
    const broad = widthCm1 === 0 ? loading.slice() : broaden(loading, gridCm1, widthCm1).slice();
    if (widthCm1 !== 0) orthonormalise(broad, loadings);
    loadings.push(broad);
  }
  const along = mean.slice();
  let sum = 0;
  for (const value of along) sum += value;
  for (let i = 0; i < along.length; i++) along[i] -= sum / along.length;
  orthonormalise(along, loadings);
  return { model: { ...model, mean, loadings }, along };
}

function orthonormalise(vector: Float64Array, before: readonly Float64Array[]): void {
  for (let pass = 0; pass < 2; pass++) {
    for (const other of before) {
      const score = inner(vector, other);
      for (let i = 0; i < vector.length; i++) vector[i] -= score * other[i];
    }
    const length = Math.sqrt(inner(vector, vector));
    if (length > 0) for (let i = 0; i < vector.length; i++) vector[i] /= length;
  }
}

function inner(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}
