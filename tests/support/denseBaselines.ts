import { Matrix, solve } from 'ml-matrix';

/**
 * The baseline papers' equations written out with full matrices, sharing nothing with the product's kernels: slow,
 * short and plain, to check them by.
 */
export function denseWhittaker(y: readonly number[], weights: readonly number[], lambda: number): number[] {
  const n = y.length;
  const differences = Matrix.zeros(n - 2, n);
  for (let i = 0; i < n - 2; i++) {
    differences.set(i, i, 1);
    differences.set(i, i + 1, -2);
    differences.set(i, i + 2, 1);
  }
  const system = differences.transpose().mmul(differences).mul(lambda);
  for (let i = 0; i < n; i++) system.set(i, i, system.get(i, i) + weights[i]);
  const right = Matrix.columnVector(y.map((value, i) => value * weights[i]));
  return solve(system, right).to1DArray();
}

/** Eilers & Boelens 2005: weights p above, 1 - p otherwise, a fixed number of rounds. */
export function denseAsymmetric(y: readonly number[], lambda: number, p: number, rounds: number): number[] {
  let z: number[] = [];
  let weights = y.map(() => 1);
  for (let t = 0; t < rounds; t++) {
    z = denseWhittaker(y, weights, lambda);
    weights = y.map((value, i) => (value > z[i] ? p : 1 - p));
  }
  return z;
}

/** Zhang, Chen & Liang 2010. */
export function denseAirpls(y: readonly number[], lambda: number, rounds: number): number[] {
  const whole = y.reduce((sum, value) => sum + Math.abs(value), 0);
  let weights = y.map(() => 1);
  for (let t = 1; ; t++) {
    const z = denseWhittaker(y, weights, lambda);
    const d = y.map((value, i) => value - z[i]);
    const negative = d.filter((value) => value < 0);
    const size = Math.abs(negative.reduce((sum, value) => sum + value, 0));
    if (size < 0.001 * whole || t === rounds) return z;
    weights = d.map((value) => (value >= 0 ? 0 : Math.exp((t * Math.abs(value)) / size)));
    weights[0] = Math.exp((t * Math.max(...negative)) / size);
    weights[y.length - 1] = weights[0];
  }
}

/** Baek, Park, Ahn & Choo 2015. */
export function denseArpls(y: readonly number[], lambda: number, tolerance: number): number[] {
  let weights = y.map(() => 1);
  for (;;) {
    const z = denseWhittaker(y, weights, lambda);
    const d = y.map((value, i) => value - z[i]);
    const negative = d.filter((value) => value < 0);
    const m = negative.reduce((sum, value) => sum + value, 0) / negative.length;
    const s = Math.sqrt(negative.reduce((sum, value) => sum + (value - m) ** 2, 0) / (negative.length - 1));
    const next = d.map((value) => 1 / (1 + Math.exp((2 * (value - (2 * s - m))) / s)));
    const change = Math.hypot(...next.map((value, i) => value - weights[i]));
    if (change / Math.hypot(...weights) < tolerance) return z;
    weights = next;
  }
}

/** Lieber & Mahadevan-Jansen 2003: least squares by the normal equations in powers of a scaled abscissa. */
export function denseModifiedPolynomial(y: readonly number[], order: number, rounds: number): number[] {
  const n = y.length;
  const powers = new Matrix(n, order + 1);
  for (let i = 0; i < n; i++) for (let k = 0; k <= order; k++) powers.set(i, k, ((2 * i) / (n - 1) - 1) ** k);
  let cut = [...y];
  let fit: number[] = [];
  for (let t = 0; t < rounds; t++) {
    const normal = powers.transpose().mmul(powers);
    const coefficients = solve(normal, powers.transpose().mmul(Matrix.columnVector(cut)));
    fit = powers.mmul(coefficients).to1DArray();
    cut = cut.map((value, i) => Math.min(value, fit[i]));
  }
  return fit;
}
