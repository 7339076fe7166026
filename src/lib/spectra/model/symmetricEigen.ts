/** Eigenvalues descending, and the unit eigenvectors as rows in the same order. */
export interface SymmetricEigen {
  readonly size: number;
  readonly values: Float64Array;
  /** Row-major, size x size: row k is the eigenvector of values[k]. */
  readonly vectors: Float64Array;
}

/**
 * All eigenvalues and eigenvectors of a real symmetric matrix: Householder reduction to tridiagonal form,
 * then QL with implicit shifts (Golub & Van Loan, Matrix Computations, ch. 8). Plain float64 in a fixed
 * order with +, -, *, / and square roots only, all exactly rounded by IEEE 754: the same input gives the
 * same bits in every engine. Eigenvectors are kept as rows so that each rotation runs over two contiguous
 * stretches of memory.
 *
 * @param matrix row-major, size x size, symmetric; not changed
 * @throws Error should an eigenvalue not settle in 60 sweeps (never seen on finite input)
 */
export function symmetricEigen(matrix: Float64Array, size: number): SymmetricEigen {
  if (matrix.length !== size * size) throw new RangeError('symmetricEigen: matrix is not size x size');
  const work = Float64Array.from(matrix);
  const diagonal = new Float64Array(size);
  const offDiagonal = new Float64Array(size);
  const vectors = tridiagonalise(work, size, diagonal, offDiagonal);
  implicitQl(diagonal, offDiagonal, vectors, size);
  return sortDescending(diagonal, vectors, size);
}

/**
 * Reduces `a` to tridiagonal form T = Q' a Q. On return `diagonal` holds T's diagonal, `offDiagonal[k]`
 * couples k and k + 1. @returns Q' row-major (its rows become the eigenvectors once QL has turned them).
 */
function tridiagonalise(
  a: Float64Array,
  n: number,
  diagonal: Float64Array,
  offDiagonal: Float64Array
): Float64Array {
  const reflectors: { v: Float64Array; beta: number; from: number }[] = [];
  for (let k = 0; k + 2 < n; k++) {
    const from = k + 1;
    const v = a.slice(k * n + from, (k + 1) * n);
    let tail = 0;
    for (let i = 1; i < v.length; i++) tail += v[i] * v[i];
    if (tail === 0) {
      offDiagonal[k] = v[0];
      continue;
    }
    const length = Math.sqrt(v[0] * v[0] + tail);
    const alpha = v[0] > 0 ? -length : length;
    offDiagonal[k] = alpha;
    v[0] -= alpha;
    const beta = 2 / (v[0] * v[0] + tail);
    reflectTrailing(a, n, from, v, beta);
    reflectors.push({ v, beta, from });
  }
  if (n > 1) offDiagonal[n - 2] = a[(n - 2) * n + n - 1];
  for (let k = 0; k < n; k++) diagonal[k] = a[k * n + k];
  return accumulate(reflectors, n);
}

/** Applies the reflection I - beta v v' from both sides to the trailing block that starts at `from`. */
function reflectTrailing(a: Float64Array, n: number, from: number, v: Float64Array, beta: number): void {
  const m = v.length;
  const w = new Float64Array(m);
  let half = 0;
  for (let i = 0; i < m; i++) {
    const row = (from + i) * n + from;
    let sum = 0;
    for (let j = 0; j < m; j++) sum += a[row + j] * v[j];
    w[i] = beta * sum;
    half += w[i] * v[i];
  }
  half *= beta / 2;
  for (let i = 0; i < m; i++) w[i] -= half * v[i];
  for (let i = 0; i < m; i++) {
    const row = (from + i) * n + from;
    const vi = v[i];
    const wi = w[i];
    for (let j = 0; j < m; j++) a[row + j] -= vi * w[j] + wi * v[j];
  }
}

/** Q' = H(last) ... H(1), row-major, built from the last reflector back so that the work stays small. */
function accumulate(
  reflectors: readonly { v: Float64Array; beta: number; from: number }[],
  n: number
): Float64Array {
  const q = new Float64Array(n * n);
  for (let i = 0; i < n; i++) q[i * n + i] = 1;
  for (let r = reflectors.length - 1; r >= 0; r--) {
    const { v, beta, from } = reflectors[r];
    for (let i = from; i < n; i++) {
      const row = i * n + from;
      let sum = 0;
      for (let j = 0; j < v.length; j++) sum += q[row + j] * v[j];
      sum *= beta;
      for (let j = 0; j < v.length; j++) q[row + j] -= sum * v[j];
    }
  }
  return q;
}

/** QL with implicit Wilkinson shifts; turns `diagonal` into eigenvalues and the rows of `vectors` with it. */
function implicitQl(diagonal: Float64Array, off: Float64Array, vectors: Float64Array, n: number): void {
  for (let low = 0; low < n; low++) {
    for (let sweep = 0; ; sweep++) {
      const high = firstSmall(diagonal, off, low, n);
      if (high === low) break;
      if (sweep === 60) throw new Error('symmetricEigen: no convergence');
      let g = (diagonal[low + 1] - diagonal[low]) / (2 * off[low]);
      let r = Math.sqrt(g * g + 1);
      g = diagonal[high] - diagonal[low] + off[low] / (g + (g >= 0 ? r : -r));
      let s = 1;
      let c = 1;
      let p = 0;
      let i = high - 1;
      for (; i >= low; i--) {
        const f = s * off[i];
        const b = c * off[i];
        r = Math.sqrt(f * f + g * g);
        off[i + 1] = r;
        if (r === 0) {
          diagonal[i + 1] -= p;
          off[high] = 0;
          break;
        }
        s = f / r;
        c = g / r;
        g = diagonal[i + 1] - p;
        r = (diagonal[i] - g) * s + 2 * c * b;
        p = s * r;
        diagonal[i + 1] = g + p;
        g = c * r - b;
        rotateRows(vectors, n, i, c, s);
      }
      if (i >= low) continue;
      diagonal[low] -= p;
      off[low] = g;
      off[high] = 0;
    }
  }
}

/** First index from `low` whose coupling to the next is negligible beside its neighbours. */
function firstSmall(diagonal: Float64Array, off: Float64Array, low: number, n: number): number {
  let m = low;
  for (; m < n - 1; m++) {
    const scale = Math.abs(diagonal[m]) + Math.abs(diagonal[m + 1]);
    if (Math.abs(off[m]) <= Number.EPSILON * scale) break;
  }
  return m;
}

function rotateRows(vectors: Float64Array, n: number, i: number, c: number, s: number): void {
  const lower = vectors.subarray(i * n, (i + 1) * n);
  const upper = vectors.subarray((i + 1) * n, (i + 2) * n);
  for (let k = 0; k < n; k++) {
    const u = upper[k];
    const l = lower[k];
    upper[k] = s * l + c * u;
    lower[k] = c * l - s * u;
  }
}

function sortDescending(diagonal: Float64Array, vectors: Float64Array, n: number): SymmetricEigen {
  const order = Array.from({ length: n }, (_, k) => k).sort((a, b) => diagonal[b] - diagonal[a] || a - b);
  const values = new Float64Array(n);
  const sorted = new Float64Array(n * n);
  order.forEach((from, to) => {
    values[to] = diagonal[from];
    sorted.set(vectors.subarray(from * n, (from + 1) * n), to * n);
  });
  return { size: n, values, vectors: sorted };
}
