import type { Spectrum } from '../spectrum';
import { solveSymmetric } from './solveSymmetric';

/** A band fitted by least squares on a straight local background. */
export interface BandFit {
  readonly centreCm1: number;
  /** Standard error of the centre from the residual of the fit, cm-1. */
  readonly centreErrorCm1: number;
  readonly height: number;
  readonly fwhmCm1: number;
  /** Lorentzian share of the shape, 0 to 1. */
  readonly lorentzian: number;
  /** Root mean square of the residual relative to the height. */
  readonly misfit: number;
  readonly points: number;
}

export interface BandWindow {
  /** Where the band is thought to be, cm-1. */
  readonly nearCm1: number;
  /** First guess of its full width at half height, cm-1. */
  readonly widthCm1: number;
  /** Part of the axis the fit may use, cm-1. */
  readonly fromCm1: number;
  readonly toCm1: number;
}

export type BandShape = 'lorentzian' | 'pseudo-voigt';

const MOST_STEPS = 60;
const LN2 = 0.6931471805599453;

/**
 * Fits height, centre, width (and Lorentzian share) of one band, with a straight line under it, by
 * Levenberg-Marquardt. Bounded in steps and the same every time.
 *
 * The centre is what matters: it comes to a small fraction of the point spacing, with its standard error.
 * @param shape 'pseudo-voigt' suits a band broadened by the instrument; 'lorentzian' one much wider than that
 * @returns null when the window holds too few points, or no maximum is found within it
 */
export function fitBand(
  spectrum: Spectrum,
  window: BandWindow,
  shape: BandShape = 'pseudo-voigt'
): BandFit | null {
  const { x, y } = cut(spectrum, window);
  const free = shape === 'pseudo-voigt' ? 6 : 5;
  if (x.length < free + 1) return null;
  const scale = y.reduce((most, value) => Math.max(most, value), -Infinity) - Math.min(...y);
  if (!(scale > 0)) return null;
  const origin = window.nearCm1;
  const u = x.map((value) => (value - origin) / window.widthCm1);
  const v = y.map((value) => (value - y[0]) / scale);
  const start = [1, 0, 0.5, v[0], (v[v.length - 1] - v[0]) / (u[u.length - 1] - u[0]), 0.5];
  const result = levenbergMarquardt(u, v, start, free);
  if (result === null) return null;
  const [height, centre, half, , , share] = result.parameters;
  if (!(height > 0) || centre < u[0] || centre > u[u.length - 1]) return null;
  return {
    centreCm1: origin + centre * window.widthCm1,
    centreErrorCm1: result.errors[1] * window.widthCm1,
    height: height * scale,
    fwhmCm1: 2 * half * window.widthCm1,
    lorentzian: shape === 'lorentzian' ? 1 : share,
    misfit: Math.sqrt(result.squares / u.length) / height,
    points: u.length
  };
}

function cut(spectrum: Spectrum, window: BandWindow): { x: Float64Array; y: Float64Array } {
  const { shiftCm1, intensity } = spectrum;
  let first = 0;
  while (first < shiftCm1.length && shiftCm1[first] < window.fromCm1) first++;
  let end = first;
  while (end < shiftCm1.length && shiftCm1[end] <= window.toCm1) end++;
  return { x: shiftCm1.subarray(first, end), y: intensity.subarray(first, end) };
}

interface Minimum {
  readonly parameters: number[];
  readonly errors: number[];
  readonly squares: number;
}

/** Parameters: height, centre, half width, background at 0, background slope, Lorentzian share. */
function levenbergMarquardt(u: Float64Array, v: Float64Array, start: number[], free: number): Minimum | null {
  let parameters = free === 5 ? [...start.slice(0, 5), 1] : start;
  let state = normalEquations(u, v, parameters, free);
  let damping = 1e-3;
  for (let step = 0; step < MOST_STEPS; step++) {
    const damped = state.matrix.map((row, i) =>
      row.map((value, j) => (i === j ? value * (1 + damping) : value))
    );
    const move = solveSymmetric(damped, state.right);
    if (move === null) return null;
    const trial = parameters.map((value, i) => (i < free ? value + move.solution[i] : value));
    trial[2] = Math.min(50, Math.max(0.02, trial[2]));
    trial[5] = Math.min(1, Math.max(0, trial[5]));
    const next = normalEquations(u, v, trial, free);
    if (next.squares <= state.squares) {
      const settled = state.squares - next.squares <= 1e-14 * state.squares;
      parameters = trial;
      state = next;
      damping = Math.max(1e-9, damping / 8);
      if (settled) break;
    } else {
      damping *= 6;
      if (damping > 1e12) break;
    }
  }
  const inverse = solveSymmetric(state.matrix, state.right);
  if (inverse === null) return null;
  const variance = state.squares / Math.max(1, u.length - free);
  const errors = inverse.inverseDiagonal.map((value) => Math.sqrt(Math.max(0, variance * value)));
  return { parameters, errors, squares: state.squares };
}

function normalEquations(
  u: Float64Array,
  v: Float64Array,
  parameters: readonly number[],
  free: number
): { matrix: number[][]; right: number[]; squares: number } {
  const matrix = Array.from({ length: free }, () => new Array<number>(free).fill(0));
  const right = new Array<number>(free).fill(0);
  const slope = new Array<number>(6).fill(0);
  let squares = 0;
  for (let k = 0; k < u.length; k++) {
    const left = v[k] - bandAt(u[k], parameters, slope);
    squares += left * left;
    for (let i = 0; i < free; i++) {
      right[i] += slope[i] * left;
      for (let j = 0; j <= i; j++) matrix[i][j] += slope[i] * slope[j];
    }
  }
  for (let i = 0; i < free; i++) for (let j = 0; j < i; j++) matrix[j][i] = matrix[i][j];
  return { matrix, right, squares };
}

/** Value of the band with its background at u; writes the derivatives by each parameter into `slope`. */
function bandAt(u: number, parameters: readonly number[], slope: number[]): number {
  const [height, centre, half, level, tilt, share] = parameters;
  const d = (u - centre) / half;
  const lorentz = 1 / (1 + d * d);
  const gauss = Math.exp(-LN2 * d * d);
  const shape = share * lorentz + (1 - share) * gauss;
  const byD = share * -2 * d * lorentz * lorentz + (1 - share) * -2 * LN2 * d * gauss;
  slope[0] = shape;
  slope[1] = (-height * byD) / half;
  slope[2] = (-height * byD * d) / half;
  slope[3] = 1;
  slope[4] = u;
  slope[5] = height * (lorentz - gauss);
  return height * shape + level + tilt * u;
}
