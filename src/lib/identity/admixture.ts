import { interleavedDots } from '../spectra/compare/interleavedRows';
import type { RivalMatrix } from '../spectra/compare/rivals';
import { centredSquares } from './broaden';
import { NOISE_RUN, type ClassAtWidth } from './classAtWidth';

/** The other material that explains most of what the claimed one leaves over. */
export interface Admixture {
  /** Row of the library matrix. */
  readonly index: number;
  /** Share of the signal, 0 to 1, in the treated spectrum; an indication of amount, not an amount. */
  readonly share: number;
  /** The same less what the scan's noise could make up. */
  readonly certainShare: number;
  /** How much of the residual beyond noise it explains, 0 to 1. */
  readonly explained: number;
}

/** Other materials seen from a class: how much of each stands outside the class's own directions. */
export interface RivalsOutside {
  /** Squared length outside, of each unit row. */
  readonly outside: Float64Array;
  /** Cosine with the claimed mean's direction. */
  readonly alongMean: Float64Array;
}

/** Less of a row than this outside the class: too alike to be told apart by what is left over. */
const LEAST_OUTSIDE = 0.04;
/** An admixture has to explain this much of the residual; below it, it only resembles it by chance. */
const LEAST_EXPLAINED = 0.3;
/** What the noise of the scan could make up: this many standard errors. */
const NOISE_MULTIPLE = 4;

export function rivalsOutside(matrix: RivalMatrix, { model, along }: ClassAtWidth): RivalsOutside {
  const outside = new Float64Array(matrix.count).fill(1);
  // A first material has no rival: an empty matrix has no row length either.
  if (matrix.count === 0) return { outside, alongMean: new Float64Array(0) };
  for (const direction of [...model.loadings, along]) {
    const dots = interleavedDots(matrix, direction);
    for (let k = 0; k < outside.length; k++) outside[k] -= dots[k] * dots[k];
  }
  return { outside, alongMean: interleavedDots(matrix, along) };
}

/** A treated scan, what its class leaves of it, and the squared length of its noise. */
export interface ScanResidual {
  readonly seen: Float64Array;
  readonly residual: Float64Array;
  readonly noiseEnergy: number;
}

/**
 * Looks in a residual for the bands of one other material: for each row of the library, the least-squares amount that
 * goes with the class's own directions left free. A mixture with a known material is so found at a share at which
 * neither correlation nor the residual's size would tell.
 */
export function findAdmixture(
  { seen, residual, noiseEnergy }: ScanResidual,
  { along }: ClassAtWidth,
  {
    matrix,
    outside: { outside, alongMean }
  }: { readonly matrix: RivalMatrix; readonly outside: RivalsOutside }
): Admixture | null {
  const left = withoutAmplitude(residual, along);
  const structured = Math.max(0, left.squares - noiseEnergy);
  if (matrix.count === 0 || !(structured > 0)) return null;
  const dots = interleavedDots(matrix, left.values);
  let best: { index: number; explains: number } | null = null;
  for (let k = 0; k < matrix.count; k++) {
    if (dots[k] <= 0 || outside[k] < LEAST_OUTSIDE) continue;
    const explains = (dots[k] * dots[k]) / outside[k];
    if (best === null || explains > best.explains) best = { index: k, explains };
  }
  if (best === null) return null;
  const explained = Math.min(1, best.explains / structured);
  if (explained < LEAST_EXPLAINED) return null;
  const { index } = best;
  const amount = dots[index] / outside[index];
  const own = Math.max(0, Math.sqrt(centredSquares(seen)) - amount * alongMean[index]);
  const error = Math.sqrt((noiseEnergy * NOISE_RUN) / (residual.length * outside[index]));
  const certain = Math.max(0, amount - NOISE_MULTIPLE * error);
  return { index, share: amount / (amount + own), certainShare: certain / (amount + own), explained };
}

function withoutAmplitude(residual: Float64Array, along: Float64Array) {
  const values = residual.slice();
  let amount = 0;
  for (let i = 0; i < values.length; i++) amount += values[i] * along[i];
  let squares = 0;
  for (let i = 0; i < values.length; i++) {
    values[i] -= amount * along[i];
    squares += values[i] * values[i];
  }
  return { values, squares };
}
