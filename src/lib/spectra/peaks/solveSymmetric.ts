/**
 * Solves a small symmetric positive definite system by Gauss-Jordan elimination on the matrix scaled to a unit
 * diagonal, and gives the diagonal of the inverse for standard errors.
 * @returns null when the matrix is singular to working accuracy
 */
export function solveSymmetric(
  matrix: readonly (readonly number[])[],
  right: readonly number[]
): { solution: number[]; inverseDiagonal: number[] } | null {
  const size = right.length;
  const scale = matrix.map((row, i) => Math.sqrt(row[i]));
  if (scale.some((value) => !(value > 0))) return null;
  const work = matrix.map((row, i) => [
    ...row.map((value, j) => value / (scale[i] * scale[j])),
    ...row.map((_, j) => (i === j ? 1 : 0))
  ]);
  for (let k = 0; k < size; k++) {
    const pivot = work[k][k];
    if (!(pivot > 1e-14)) return null;
    for (let j = 0; j < 2 * size; j++) work[k][j] /= pivot;
    for (let i = 0; i < size; i++) {
      if (i === k) continue;
      const factor = work[i][k];
      for (let j = 0; j < 2 * size; j++) work[i][j] -= factor * work[k][j];
    }
  }
  const solution = scale.map((own, i) => {
    let sum = 0;
    for (let j = 0; j < size; j++) sum += (work[i][size + j] * right[j]) / scale[j];
    return sum / own;
  });
  const inverseDiagonal = scale.map((own, i) => work[i][size + i] / (own * own));
  return { solution, inverseDiagonal };
}
