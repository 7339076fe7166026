import { noiseLevel } from '../spectra/peaks/noise';
import { applySteps } from '../spectra/preprocess/steps';
import type { Spectrum } from '../spectra/spectrum';
import { broaden } from './broaden';
import type { PreparedMethod } from './prepared';

/** The scan over its reference as a person sees them, on the display grid. */
export interface DisplayComparison {
  /** Scan scaled to fit the reference mean best. */
  readonly scan: Float64Array;
  readonly residual: Float64Array;
  /** Excess over the references' envelope (positive) or what is missing under it (negative), smoothed. */
  readonly outside: Float64Array;
  readonly largestUnexplained: number;
  readonly largestMissing: number;
  /** Height that the scan's noise alone may reach there. */
  readonly noiseHeight: number;
  /** The references at the scan's resolution. */
  readonly mean: Float64Array;
  readonly low: Float64Array;
  readonly high: Float64Array;
}

/** Bands may stand this far from the reference's place before they count as another band, cm-1. */
const ENVELOPE_REACH_CM1 = 4;
/** Heights outside the envelope are averaged over this many points on each side. */
const SMOOTH = 2;
/** The highest of some hundred independent heights of noise stays below this many standard deviations. */
const NOISE_MULTIPLE = 4;

/** Fits the scan to the reference mean by one factor and looks for what lies outside the references' envelope. */
export function compareDisplay(
  scan: Spectrum,
  { display }: PreparedMethod,
  widthCm1: number
): DisplayComparison {
  const { gridCm1 } = display;
  const shown = broaden(applySteps(scan, display.recipe).intensity, gridCm1, Math.max(0, -widthCm1));
  const atWidth = (values: Float64Array) => broaden(values, gridCm1, Math.max(0, widthCm1));
  const references = {
    gridCm1,
    mean: atWidth(display.mean),
    low: atWidth(display.low),
    high: atWidth(display.high)
  };
  const { mean } = references;
  let together = 0;
  let own = 0;
  for (let i = 0; i < shown.length; i++) {
    together += shown[i] * mean[i];
    own += shown[i] * shown[i];
  }
  const factor = own > 0 ? Math.max(0, together / own) : 0;
  const scaled = shown.map((value) => value * factor);
  const residual = scaled.map((value, i) => value - mean[i]);
  const outside = smooth(outsideEnvelope(scaled, references));
  let largestUnexplained = 0;
  let largestMissing = 0;
  for (const value of outside) {
    largestUnexplained = Math.max(largestUnexplained, value);
    largestMissing = Math.max(largestMissing, -value);
  }
  const spacing = (scan.shiftCm1[scan.shiftCm1.length - 1] - scan.shiftCm1[0]) / (scan.shiftCm1.length - 1);
  const averaged = Math.max(1, ((2 * SMOOTH + 1) * (gridCm1[1] - gridCm1[0])) / spacing);
  const noiseHeight = (NOISE_MULTIPLE * factor * noiseLevel(scan.intensity)) / Math.sqrt(averaged);
  return { scan: scaled, residual, outside, largestUnexplained, largestMissing, noiseHeight, ...references };
}

function outsideEnvelope(
  scan: Float64Array,
  { gridCm1, low, high }: { gridCm1: Float64Array; low: Float64Array; high: Float64Array }
): Float64Array {
  const step = gridCm1.length > 1 ? gridCm1[1] - gridCm1[0] : 1;
  const reach = Math.max(1, Math.round(ENVELOPE_REACH_CM1 / step));
  return scan.map((value, i) => {
    let ceiling = -Infinity;
    let floor = Infinity;
    for (let j = Math.max(0, i - reach); j <= Math.min(scan.length - 1, i + reach); j++) {
      ceiling = Math.max(ceiling, high[j]);
      floor = Math.min(floor, low[j]);
    }
    return value > ceiling ? value - ceiling : value < floor ? value - floor : 0;
  });
}

function smooth(values: Float64Array): Float64Array {
  return values.map((_, i) => {
    let sum = 0;
    for (let j = i - SMOOTH; j <= i + SMOOTH; j++) sum += values[Math.min(values.length - 1, Math.max(0, j))];
    return sum / (2 * SMOOTH + 1);
  });
}
