import type { Spectrum } from '../spectrum';
import { noiseLevel } from './noise';

/** A band as it stands in a spectrum, without a fit. */
export interface Band {
  /** Highest point, zero-based. */
  readonly index: number;
  /** Apex of the parabola through the highest point and its neighbours, cm-1. */
  readonly shiftCm1: number;
  readonly height: number;
  /** Height above the higher of the two saddles that part it from higher ground. */
  readonly prominence: number;
  /** Full width where the band has fallen by half its prominence, cm-1. */
  readonly fwhmCm1: number;
}

export interface FindOptions {
  /** Smallest prominence in units of the spectrum's noise. */
  readonly noiseMultiple?: number;
  /** Smallest prominence as a fraction of the largest one. */
  readonly relativeProminence?: number;
  /** Noise, where the caller knows better than an estimate from this spectrum (e.g. it has been smoothed). */
  readonly noise?: number;
}

/** A maximum of noise alone exceeds this many standard deviations about once in a thousand spectra. */
const NOISE_MULTIPLE = 6;
const RELATIVE_PROMINENCE = 0.02;

/**
 * Bands of a baseline-corrected spectrum: local maxima whose prominence stands out of the noise and is not
 * negligible beside the strongest. A flat maximum counts once, at its middle. Maxima at either end of the axis
 * are left out: half a band has no position.
 * @returns bands in ascending order of shift
 */
export function findBands(spectrum: Spectrum, options: FindOptions = {}): Band[] {
  const { intensity } = spectrum;
  const noise = options.noise ?? noiseLevel(intensity);
  const maxima = localMaxima(intensity);
  const prominences = maxima.map((index) => prominenceAt(intensity, index));
  const largest = prominences.reduce((most, value) => Math.max(most, value), 0);
  const least = Math.max(
    (options.noiseMultiple ?? NOISE_MULTIPLE) * noise,
    (options.relativeProminence ?? RELATIVE_PROMINENCE) * largest
  );
  const bands: Band[] = [];
  maxima.forEach((index, k) => {
    const prominence = prominences[k];
    if (prominence > 0 && prominence >= least) bands.push(describe(spectrum, index, prominence));
  });
  return bands;
}

function localMaxima(y: Float64Array): number[] {
  const found: number[] = [];
  for (let i = 1; i + 1 < y.length; i++) {
    if (!(y[i] > y[i - 1])) continue;
    let last = i;
    while (last + 1 < y.length && y[last + 1] === y[i]) last++;
    if (last + 1 < y.length && y[last + 1] < y[i]) found.push((i + last) >> 1);
    i = last;
  }
  return found;
}

function prominenceAt(y: Float64Array, index: number): number {
  const top = y[index];
  let left = top;
  for (let i = index - 1; i >= 0 && y[i] <= top; i--) left = Math.min(left, y[i]);
  let right = top;
  for (let i = index + 1; i < y.length && y[i] <= top; i++) right = Math.min(right, y[i]);
  return top - Math.max(left, right);
}

function describe(spectrum: Spectrum, index: number, prominence: number): Band {
  const { shiftCm1, intensity } = spectrum;
  const level = intensity[index] - prominence / 2;
  const width = crossing(spectrum, index, 1, level) - crossing(spectrum, index, -1, level);
  return {
    index,
    shiftCm1: apex(shiftCm1, intensity, index),
    height: intensity[index],
    prominence,
    fwhmCm1: width
  };
}

/** Shift at which the flank first falls through `level`, by straight line between points. */
function crossing(spectrum: Spectrum, index: number, step: 1 | -1, level: number): number {
  const { shiftCm1: x, intensity: y } = spectrum;
  let i = index;
  while (i + step >= 0 && i + step < y.length && y[i + step] > level) i += step;
  const next = i + step;
  if (next < 0 || next >= y.length) return x[i];
  const fall = y[i] - y[next];
  return fall > 0 ? x[i] + ((x[next] - x[i]) * (y[i] - level)) / fall : x[i];
}

/** Apex of the parabola through three neighbouring points (uneven spacing allowed), kept between them. */
export function apex(x: Float64Array, y: Float64Array, index: number): number {
  if (index < 1 || index + 1 >= x.length) return x[index];
  const left = x[index - 1] - x[index];
  const right = x[index + 1] - x[index];
  const slopeLeft = (y[index - 1] - y[index]) / left;
  const slopeRight = (y[index + 1] - y[index]) / right;
  const curvature = (slopeRight - slopeLeft) / (right - left);
  if (!(curvature < 0)) return x[index];
  const slope = slopeLeft - curvature * left;
  const offset = -slope / (2 * curvature);
  return x[index] + Math.min(right, Math.max(left, offset));
}
