/** Weights of a Savitzky-Golay filter for every position in its window. */
export interface FilterWeights {
  readonly half: number;
  readonly derivative: number;
  /** `rows[t][k]`: weight of window point k in the value (or derivative per step) at window point t, both from 0. */
  readonly rows: readonly Float64Array[];
}

const kept = new Map<string, FilterWeights>();

/**
 * Weights from Gram's discrete orthogonal polynomials (Gorry, Analytical Chemistry 62:570, 1990): the weight of
 * point i in the d-th derivative at point t of the fitted polynomial of order n, with 2m + 1 points numbered -m … m, is
 * sum over k = 0 … n of P_k(i) P_k^(d)(t) with P_k orthonormal over the points. Kept once computed: they depend on
 * the three numbers alone.
 * @param window odd, >= 3
 * @param order < window
 * @param derivative <= order; per step between points, factorial included
 */
export function filterWeights(window: number, order: number, derivative: number): FilterWeights {
  const key = `${window} ${order} ${derivative}`;
  let weights = kept.get(key);
  if (weights === undefined) kept.set(key, (weights = compute(window, order, derivative)));
  return weights;
}

function compute(window: number, order: number, derivative: number): FilterWeights {
  const half = (window - 1) / 2;
  // polynomials[d][k][t]: d-th derivative of the k-th monic orthogonal polynomial at point t.
  const polynomials = monicGramPolynomials(half, order, derivative);
  const squares = polynomials[0].map((values) => values.reduce((sum, value) => sum + value * value, 0));
  const rows: Float64Array[] = [];
  for (let t = 0; t < window; t++) {
    const row = new Float64Array(window);
    for (let i = 0; i < window; i++) {
      let sum = 0;
      for (let k = 0; k <= order; k++)
        sum += (polynomials[0][k][i] * polynomials[derivative][k][t]) / squares[k];
      row[i] = sum;
    }
    rows.push(row);
  }
  return { half, derivative, rows };
}

/**
 * Monic polynomials orthogonal over -m … m, by their three-term recurrence P_k = t P_(k-1) - b_k P_(k-2) with
 * b_k = (k-1)^2 (N^2 - (k-1)^2) / (4 (4 (k-1)^2 - 1)), N = 2m + 1. Differentiating it d times gives
 * P_k^(d) = t P_(k-1)^(d) + d P_(k-1)^(d-1) - b_k P_(k-2)^(d).
 */
function monicGramPolynomials(half: number, order: number, derivative: number): number[][][] {
  const points = 2 * half + 1;
  const all: number[][][] = [];
  for (let d = 0; d <= derivative; d++) {
    const level: number[][] = [new Array<number>(points).fill(d === 0 ? 1 : 0)];
    for (let k = 1; k <= order; k++) {
      const j = k - 1;
      const b = (j * j * (points * points - j * j)) / (4 * (4 * j * j - 1));
      const values = new Array<number>(points);
      for (let i = 0; i < points; i++) {
        values[i] = (i - half) * level[k - 1][i];
        if (d > 0) values[i] += d * all[d - 1][k - 1][i];
        if (k > 1) values[i] -= b * level[k - 2][i];
      }
      level.push(values);
    }
    all.push(level);
  }
  return all;
}
