import { workArray } from './workArray';

/** Fewest points on which a second-order Whittaker smooth is solved here. */
export const MIN_WHITTAKER_POINTS = 4;

const couplings = workArray();
const inverses = workArray();
const rights = workArray();

/**
 * Whittaker smoother with second-order differences (Whittaker 1923; Eilers, Analytical Chemistry 75:3631, 2003):
 * the z that minimises sum w (y - z)^2 + lambda sum (z[i] - 2 z[i+1] + z[i+2])^2, i.e. (W + lambda D'D) z = W y.
 *
 * The matrix is symmetric with five bands, so it is factored as L D L' by hand. Dividing by lambda makes the
 * outermost band 1. Each elimination waits for the division before it; working inwards from both ends at once
 * gives the processor two independent chains, and a 2 x 2 system is left in the middle. An odd number of points
 * gets one more at the end, without weight: it falls on the line through the last two and changes none of the others.
 *
 * Worked example: y = 0 0 0 10 0 0 0, w = 1, lambda = 1 gives -0.384615 0.865385 2.5 4.038462 2.5 0.865385 -0.384615.
 * @param y values, length n >= 4
 * @param weights >= 0, at least n long, at least two of them above 0 (else the system has no single solution)
 * @param z receives the smooth, at least n long; may not be `y`
 */
export function whittaker(y: Float64Array, weights: Float64Array, lambda: number, z: Float64Array): void {
  eliminate(y, weights, 1 / lambda, z);
  substitute(y.length, z);
}

/** Works inwards from both ends, leaving one row of L D L' for each point but the middle two; puts those into `z`. */
function eliminate(y: Float64Array, weights: Float64Array, scale: number, z: Float64Array): void {
  const n = y.length;
  const even = n + (n % 2);
  const half = even / 2 - 1;
  const e = couplings(even);
  const inv = inverses(even);
  const g = rights(even);
  // D'D has 1, 5, 6, 6 … 6, 5, 1 on its diagonal, -2, -4 … -4, -2 beside it, then 1.
  // d: pivot; e: coupling to the next unknown inwards; f: right-hand side. Suffix l from the left, r from the right.
  const wl = weights[0] * scale;
  const wr = even > n ? 0 : weights[n - 1] * scale;
  let dl = wl + 1;
  let dr = wr + 1;
  let el = -2;
  let er = -2;
  let fl = wl * y[0];
  let fr = wr * y[n - 1];
  let invBeforeL = 0;
  let invBeforeR = 0;
  let gBeforeL = 0;
  let gBeforeR = 0;
  let base = 5;
  for (let i = 0; i < half; i++) {
    const j = even - 1 - i;
    const invL = 1 / dl;
    const invR = 1 / dr;
    const gL = fl * invL;
    const gR = fr * invR;
    e[i] = el;
    e[j] = er;
    inv[i] = invL;
    inv[j] = invR;
    g[i] = gL;
    g[j] = gR;
    const nextL = weights[i + 1] * scale;
    const nextR = weights[j - 1] * scale;
    dl = nextL + base - invBeforeL - el * el * invL;
    dr = nextR + base - invBeforeR - er * er * invR;
    fl = nextL * y[i + 1] - gBeforeL - el * gL;
    fr = nextR * y[j - 1] - gBeforeR - er * gR;
    el = -4 - el * invL;
    er = -4 - er * invR;
    invBeforeL = invL;
    invBeforeR = invR;
    gBeforeL = gL;
    gBeforeR = gR;
    base = 6;
  }
  // The middle pair still lacks what the other side's nearest elimination does to each; el and er both hold the -4.
  const coupling = el + er + 4;
  const dp = dl - invBeforeR;
  const dq = dr - invBeforeL;
  const fp = fl - gBeforeR;
  const fq = fr - gBeforeL;
  const determinant = dp * dq - coupling * coupling;
  z[half] = (fp * dq - fq * coupling) / determinant;
  z[half + 1] = (fq * dp - fp * coupling) / determinant;
}

/** Works outwards from the middle two of `z`. */
function substitute(n: number, z: Float64Array): void {
  const even = n + (n % 2);
  const half = even / 2 - 1;
  const e = couplings(even);
  const inv = inverses(even);
  const g = rights(even);
  let left = z[half];
  let right = z[half + 1];
  let leftBefore = right;
  let rightBefore = left;
  for (let i = half - 1; i > 0; i--) {
    const j = even - 1 - i;
    const nextLeft = g[i] - inv[i] * leftBefore - e[i] * inv[i] * left;
    const nextRight = g[j] - inv[j] * rightBefore - e[j] * inv[j] * right;
    z[i] = nextLeft;
    z[j] = nextRight;
    leftBefore = left;
    rightBefore = right;
    left = nextLeft;
    right = nextRight;
  }
  z[0] = g[0] - inv[0] * leftBefore - e[0] * inv[0] * left;
  if (even === n) z[n - 1] = g[n - 1] - inv[n - 1] * rightBefore - e[n - 1] * inv[n - 1] * right;
}
