import { dotProducts } from '../compare/dotProducts';

/** References less their mean, and the inner products of all pairs of them. */
export interface CentredGram {
  readonly n: number;
  readonly points: number;
  /** Mean of the rows, length `points`. */
  readonly mean: Float64Array;
  /** Row-major n x points, each row less the mean. */
  readonly centred: Float64Array;
  /** Row-major n x n: inner products of the centred rows. */
  readonly gram: Float64Array;
}

/**
 * Centres equal-length rows and forms their Gram matrix. With far fewer spectra than points the n x n Gram
 * matrix holds all that principal components need, and is far smaller than the covariance of the points.
 * @throws RangeError when there are fewer than two rows or their lengths differ.
 */
export function centredGram(rows: readonly Float64Array[]): CentredGram {
  const n = rows.length;
  if (n < 2) throw new RangeError(`A class model needs at least two spectra; there are ${n}.`);
  const points = rows[0].length;
  rows.forEach((row, i) => {
    if (row.length !== points)
      throw new RangeError(`Spectrum ${i + 1} has ${row.length} points, not ${points}.`);
  });
  const mean = columnMeans(rows, points);
  const centred = new Float64Array(n * points);
  for (let i = 0; i < n; i++) {
    const row = rows[i];
    const start = i * points;
    for (let j = 0; j < points; j++) centred[start + j] = row[j] - mean[j];
  }
  return { n, points, mean, centred, gram: innerProducts(centred, n, points) };
}

function columnMeans(rows: readonly Float64Array[], points: number): Float64Array {
  const mean = new Float64Array(points);
  for (const row of rows) for (let j = 0; j < points; j++) mean[j] += row[j];
  for (let j = 0; j < points; j++) mean[j] /= rows.length;
  return mean;
}

function innerProducts(centred: Float64Array, n: number, points: number): Float64Array {
  const gram = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    const row = centred.subarray(i * points, (i + 1) * points);
    dotProducts(centred, points, row, gram, i, n - i, i * n + i);
    for (let j = i + 1; j < n; j++) gram[j * n + i] = gram[i * n + j];
  }
  return gram;
}
