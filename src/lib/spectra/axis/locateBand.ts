import { apex } from '../peaks/find';
import { fitBand, type BandFit } from '../peaks/fit';
import type { Spectrum } from '../spectrum';

/** How far below and above its published place a band is looked for, cm-1. */
export interface Reach {
  readonly low: number;
  readonly high: number;
}

/** How far the strongest point must stand above the lower of its surroundings, in units of noise. */
const NOISE_MULTIPLE = 8;
/** Half-width of the fitted window in units of the band's width: enough flank to part band from background. */
const WINDOW_WIDTHS = 1.4;
const LEAST_POINTS_EACH_SIDE = 4.5;

/** Search reach on each side: never past the middle between two bands of the standard. */
export function reachBetween(shiftCm1: number, all: readonly number[], search: number): Reach {
  let low = search;
  let high = search;
  for (const other of all) {
    const half = Math.abs(other - shiftCm1) / 2;
    if (other < shiftCm1) low = Math.min(low, half);
    if (other > shiftCm1) high = Math.min(high, half);
  }
  return { low, high };
}

/**
 * Finds and fits the band nearest its published place: the highest maximum within reach that stands out of the
 * noise, fitted on a straight local background.
 * @returns null when there is none, or the axis does not cover the reach
 */
export function locateBand(
  spectrum: Spectrum,
  expected: number,
  reach: Reach,
  noise: number
): BandFit | null {
  const { shiftCm1: x, intensity: y } = spectrum;
  const from = expected - reach.low;
  const to = expected + reach.high;
  if (x[0] > from || x[x.length - 1] < to) return null;
  let best = -1;
  for (let i = 1; i + 1 < x.length && x[i] <= to; i++) {
    if (x[i] < from || y[i] < y[i - 1] || y[i] < y[i + 1]) continue;
    if (best < 0 || y[i] > y[best]) best = i;
  }
  if (best < 0) return null;
  const width = halfHeightWidth(spectrum, best, from - reach.low, to + reach.high);
  if (width === null || width.height < NOISE_MULTIPLE * noise) return null;
  const centre = apex(x, y, best);
  const half = Math.max(WINDOW_WIDTHS * width.fwhm, LEAST_POINTS_EACH_SIDE * (x[best + 1] - x[best]));
  return fitBand(spectrum, {
    nearCm1: centre,
    widthCm1: width.fwhm,
    fromCm1: centre - Math.min(half, Math.max(reach.low, width.fwhm)),
    toCm1: centre + Math.min(half, Math.max(reach.high, width.fwhm))
  });
}

/** Height above the higher of the two lowest points on either side, and the width half-way down. */
function halfHeightWidth(
  spectrum: Spectrum,
  top: number,
  fromCm1: number,
  toCm1: number
): { height: number; fwhm: number } | null {
  const { shiftCm1: x, intensity: y } = spectrum;
  let left = top;
  for (let i = top; i >= 0 && x[i] >= fromCm1; i--) if (y[i] < y[left]) left = i;
  let right = top;
  for (let i = top; i < x.length && x[i] <= toCm1; i++) if (y[i] < y[right]) right = i;
  const height = y[top] - Math.max(y[left], y[right]);
  if (!(height > 0)) return null;
  const level = y[top] - height / 2;
  let low = top;
  while (low > left && y[low] > level) low--;
  let high = top;
  while (high < right && y[high] > level) high++;
  return { height, fwhm: x[high] - x[low] };
}
