/**
 * Dot products of many packed rows with one vector: the kernel under the Gram matrix of a class model.
 *
 * Order of operations, on which every recorded score rests: each dot product is summed in one float64
 * accumulator, from the first point to the last. Several rows run side by side only to keep the processor
 * busy while an addition completes; no sum is ever split, so the result does not depend on how the rows are
 * grouped and is the same, bit for bit, in every JavaScript engine.
 *
 * @param rows row-major, at least (firstRow + count) rows of `points` values
 * @param points length of a row
 * @param x the vector, length `points`
 * @param out receives `count` results from `out[outStart]`
 */
export function dotProducts(
  rows: Float64Array,
  points: number,
  x: Float64Array,
  out: Float64Array,
  firstRow = 0,
  count = points === 0 ? 0 : Math.floor(rows.length / points) - firstRow,
  outStart = 0
): void {
  if (x.length !== points || rows.length < (firstRow + count) * points || out.length < outStart + count) {
    throw new RangeError('dotProducts: rows, vector and result do not fit together');
  }
  let row = 0;
  for (; row + 4 <= count; row += 4) {
    fourRows(rows, (firstRow + row) * points, points, x, out, outStart + row);
  }
  for (; row < count; row++) {
    out[outStart + row] = dotAt(rows, (firstRow + row) * points, x, 0, points);
  }
}

/** Dot product of two vectors of equal length, summed from first to last. */
export function dot(a: Float64Array, b: Float64Array): number {
  if (a.length !== b.length) throw new RangeError(`dot: lengths differ (${a.length} and ${b.length})`);
  return dotAt(a, 0, b, 0, a.length);
}

function dotAt(a: Float64Array, aStart: number, b: Float64Array, bStart: number, points: number): number {
  let sum = 0;
  for (let i = 0; i < points; i++) sum += a[aStart + i] * b[bStart + i];
  return sum;
}

function fourRows(
  rows: Float64Array,
  a: number,
  points: number,
  x: Float64Array,
  out: Float64Array,
  outStart: number
): void {
  const b = a + points;
  const c = b + points;
  const d = c + points;
  let sumA = 0;
  let sumB = 0;
  let sumC = 0;
  let sumD = 0;
  for (let i = 0; i < points; i++) {
    const value = x[i];
    sumA += rows[a + i] * value;
    sumB += rows[b + i] * value;
    sumC += rows[c + i] * value;
    sumD += rows[d + i] * value;
  }
  out[outStart] = sumA;
  out[outStart + 1] = sumB;
  out[outStart + 2] = sumC;
  out[outStart + 3] = sumD;
}
