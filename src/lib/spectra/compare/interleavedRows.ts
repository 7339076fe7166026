/**
 * Equal-length rows stored four abreast: for each group of four rows, the first point of all four, then the
 * second point of all four, and so on. One dot product of every row with a vector then reads memory in a
 * single ascending stream, about as fast as memory can be read at all; four rows far apart are slower.
 */
export interface InterleavedRows {
  readonly count: number;
  readonly points: number;
  /** ceil(count / 4) groups of points x 4 values; missing rows of the last group are zeros. */
  readonly values: Float64Array;
}

const ABREAST = 4;

export function interleaveRows(rows: readonly Float64Array[], points: number): InterleavedRows {
  const groups = Math.ceil(rows.length / ABREAST);
  const values = new Float64Array(groups * points * ABREAST);
  rows.forEach((row, index) => {
    if (row.length !== points) throw new RangeError(`Row ${index} has ${row.length} points, not ${points}.`);
    const start = Math.floor(index / ABREAST) * points * ABREAST + (index % ABREAST);
    for (let j = 0; j < points; j++) values[start + j * ABREAST] = row[j];
  });
  return { count: rows.length, points, values };
}

/**
 * Dot product of every row with x. Each is summed in one accumulator from the first point to the last, so it
 * is the same, bit for bit, as `dot` of that row alone.
 * @returns one value per row
 */
export function interleavedDots(rows: InterleavedRows, x: Float64Array): Float64Array {
  const { count, points, values } = rows;
  if (x.length !== points) throw new RangeError(`The rows have ${points} points, the vector ${x.length}.`);
  const padded = new Float64Array(Math.ceil(count / ABREAST) * ABREAST);
  let at = 0;
  for (let row = 0; row < padded.length; row += ABREAST) {
    let first = 0;
    let second = 0;
    let third = 0;
    let fourth = 0;
    for (let j = 0; j < points; j++) {
      const value = x[j];
      first += values[at] * value;
      second += values[at + 1] * value;
      third += values[at + 2] * value;
      fourth += values[at + 3] * value;
      at += ABREAST;
    }
    padded[row] = first;
    padded[row + 1] = second;
    padded[row + 2] = third;
    padded[row + 3] = fourth;
  }
  return padded.subarray(0, count);
}

/** One row, taken out again. */
export function interleavedRow({ count, points, values }: InterleavedRows, index: number): Float64Array {
  if (!(index >= 0 && index < count)) throw new RangeError(`There is no row ${index} among ${count}.`);
  const start = Math.floor(index / ABREAST) * points * ABREAST + (index % ABREAST);
  return Float64Array.from({ length: points }, (_, j) => values[start + j * ABREAST]);
}
