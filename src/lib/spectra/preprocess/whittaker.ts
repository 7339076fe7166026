import { workArray } from './workArray';

/** Fewest points on which a second-order Whittaker smooth is solved here. */
export const MIN_WHITTAKER_POINTS = 4;

const leftRatio = workArray();
const inverse = workArray();
const rhs = workArray();

/**
 * Whittaker smoother with second-order differences (Whittaker 1923; Eilers, Analytical Chemistry 75:3631, 2003):
 * the z that minimises sum w (y - z)^2 + lambda sum (z[i] - 2 z[i+1] + z[i+2])^2, i.e. (W + lambda D'D) z = W y.
 *
 * The matrix is symmetric with five bands, so it is factored as L D L' by hand. Dividing by lambda makes the
 * outermost band 1. Each elimination waits for the division before it; working inwards from both ends at once
 * gives the processor two independent chains, and a 2 x 2 system is left in the middle.
 *
 * Worked example: y = 0 0 0 10 0 0 0, w = 1, lambda = 1 gives -0.384615 0.865385 2.5 4.038462 2.5 0.865385 -0.384615.
 * @param y values, length n >= 4
 * @param weights >= 0, at least n long, at least two of them above 0 (else the system has no single solution)
 * @param z receives the smooth, at least n long; may not be `y`
 */
export function whittaker(y: Float64Array, weights: Float64Array, lambda: number, z: Float64Array): void {
  const n = y.length;
  const ratio = leftRatio(n);
  const inv = inverse(n);
  const g = rhs(n);
  const scale = 1 / lambda;
  const lefts = (n - 2) >> 1;
  const rights = n - 2 - lefts;

  // D'D has 1, 5, 6, 6 … 6, 5, 1 on its diagonal, -2, -4 … -4, -2 beside it, then 1.
  // d: pivot; e: coupling to the next unknown inwards; f: right-hand side. Suffix l from the left, r from the right.
  let w = weights[0] * scale;
  let dl = w + 1;
  let el = -2;
  let fl = w * y[0];
  w = weights[n - 1] * scale;
  let dr = w + 1;
  let er = -2;
  let fr = w * y[n - 1];
  let baseL = 5;
  let baseR = 5;
  let invBeforeL = 0;
  let gBeforeL = 0;
  let invBeforeR = 0;
  let gBeforeR = 0;
  for (let i = 0; i < rights; i++) {
    if (i < lefts) {
      const invL = 1 / dl;
      const ratioL = el * invL;
      const gL = fl * invL;
      inv[i] = invL;
      ratio[i] = ratioL;
      g[i] = gL;
      const next = weights[i + 1] * scale;
      dl = next + baseL - el * ratioL - invBeforeL;
      fl = next * y[i + 1] - el * gL - gBeforeL;
      el = -4 - ratioL;
      invBeforeL = invL;
      gBeforeL = gL;
      baseL = 6;
    }
    const j = n - 1 - i;
    const invR = 1 / dr;
    const ratioR = er * invR;
    const gR = fr * invR;
    inv[j] = invR;
    ratio[j] = ratioR;
    g[j] = gR;
    const next = weights[j - 1] * scale;
    dr = next + baseR - er * ratioR - invBeforeR;
    fr = next * y[j - 1] - er * gR - gBeforeR;
    er = -4 - ratioR;
    invBeforeR = invR;
    gBeforeR = gR;
    baseR = 6;
  }

  // Middle pair p, q = p + 1. Each still lacks what the other side's nearest elimination does to it.
  const p = lefts;
  const q = lefts + 1;
  const dp = dl - inv[q + 1];
  const dq = dr - inv[p - 1];
  const coupling = -4 - ratio[p - 1] - ratio[q + 1];
  const fp = fl - g[q + 1];
  const fq = fr - g[p - 1];
  const determinant = dp * dq - coupling * coupling;
  let l1 = (fp * dq - fq * coupling) / determinant;
  let r1 = (fq * dp - fp * coupling) / determinant;
  z[p] = l1;
  z[q] = r1;
  let l2 = r1;
  let r2 = l1;
  for (let i = 1; i <= rights; i++) {
    if (i <= lefts) {
      const k = p - i;
      const value = g[k] - ratio[k] * l1 - inv[k] * l2;
      z[k] = value;
      l2 = l1;
      l1 = value;
    }
    const k = q + i;
    const value = g[k] - ratio[k] * r1 - inv[k] * r2;
    z[k] = value;
    r2 = r1;
    r1 = value;
  }
}
