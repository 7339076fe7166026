import { dot } from '../compare/dotProducts';
import { interleavedDots, interleaveRows, type InterleavedRows } from '../compare/interleavedRows';
import type { PackedClassModel } from './distances';

/** Many class models of one axis, stacked so that all their scores are one matrix-vector product. */
export interface ModelStack {
  readonly count: number;
  /** For each model its mean, then its loadings. */
  readonly rows: InterleavedRows;
  /** First row of each model; one more entry than models. */
  readonly firstRow: Int32Array;
  /** For each row: mean . mean for a mean, loading . mean for a loading. */
  readonly atMean: Float64Array;
  /** For each row: the eigenvalue of a loading; 0 for a mean. */
  readonly eigenvalues: Float64Array;
}

/** Stacks models that share one axis after their recipe. */
export function stackModels(models: readonly PackedClassModel[]): ModelStack {
  const points = models.length === 0 ? 0 : models[0].points;
  const firstRow = new Int32Array(models.length + 1);
  models.forEach((model, m) => {
    if (model.points !== points)
      throw new RangeError(`stackModels: model ${m} has ${model.points} points, not ${points}`);
    firstRow[m + 1] = firstRow[m] + 1 + model.loadings.length;
  });
  const rowCount = firstRow[models.length];
  const rows: Float64Array[] = [];
  const atMean = new Float64Array(rowCount);
  const eigenvalues = new Float64Array(rowCount);
  models.forEach((model, m) => {
    const first = firstRow[m];
    rows.push(model.mean);
    atMean[first] = dot(model.mean, model.mean);
    model.loadings.forEach((loading, k) => {
      rows.push(loading);
      atMean[first + 1 + k] = dot(loading, model.mean);
      eigenvalues[first + 1 + k] = model.eigenvalues[k];
    });
  });
  return { count: models.length, rows: interleaveRows(rows, points), firstRow, atMean, eigenvalues };
}

/**
 * T2 and Q of one spectrum under every model of the stack.
 *
 * Q comes as |x - m|^2 - sum t^2, so it agrees with `classDistances` to about 1e-12 of |x|^2, not to the last
 * bit: use this to survey a library, and `classDistances` for the figure that goes on record.
 */
export function stackDistances(
  stack: ModelStack,
  spectrum: Float64Array
): { t2: Float64Array; q: Float64Array } {
  const { count, firstRow, atMean, eigenvalues } = stack;
  const t2 = new Float64Array(count);
  const q = new Float64Array(count);
  if (count === 0) return { t2, q };
  const products = interleavedDots(stack.rows, spectrum);
  const square = dot(spectrum, spectrum);
  for (let m = 0; m < count; m++) {
    const first = firstRow[m];
    let rest = square - 2 * products[first] + atMean[first];
    let sum = 0;
    for (let row = first + 1; row < firstRow[m + 1]; row++) {
      const score = products[row] - atMean[row];
      sum += (score * score) / eigenvalues[row];
      rest -= score * score;
    }
    t2[m] = sum;
    q[m] = rest > 0 ? rest : 0;
  }
  return { t2, q };
}
