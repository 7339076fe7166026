import { centredUnit, withinUnit } from '../spectra/compare/correlation';
import { dot } from '../spectra/compare/dotProducts';
import { uniformSegments } from '../spectra/preprocess/segments';
import { broaden, centredSquares } from './broaden';
import { energyOf } from './noiseAfterRecipe';

/** How a scan was laid over its reference: moved, and the sharper of the two broadened. */
export interface Alignment {
  /** Added to the scan's axis, cm-1. */
  readonly shiftCm1: number;
  /** Full width that the reference was broadened by; negative: the scan was, being the sharper. */
  readonly widthCm1: number;
  readonly correlation: number;
}

/** A treated reference at every shift and width tried; each vector centred, of unit length. */
export interface Templates {
  readonly gridCm1: Float64Array;
  readonly shiftsCm1: readonly number[];
  readonly widthsCm1: readonly number[];
  /** By width, then shift. */
  readonly units: readonly (readonly Float64Array[])[];
}

/** A treated scan at every width tried; each vector centred, of unit length. */
export interface ScanLevels {
  readonly widthsCm1: readonly number[];
  readonly units: readonly Float64Array[];
  /** What the scan's own noise takes off any correlation at that width: broadening a scan also quiets it. */
  readonly quiet: readonly number[];
}

export interface AlignmentBounds {
  readonly shiftCm1: number;
  readonly widthCm1: number;
}

/** Step of the search for a residual shift, and of the widths tried, cm-1. */
const SHIFT_STEP_CM1 = 0.5;
const WIDTH_STEP_CM1 = 2;

/** A width is made up for only when agreement gains more than this by it: less is chance, and noise. */
const WIDTH_GAIN = 0.005;
/** A scan noisier than this says nothing about widths. */
const MOST_NOISE = 0.9;

/** Nearest to nothing first, so that among equals the smaller change wins. */
const shiftsWithin = (bound: number): number[] => {
  const shifts = [0];
  for (let k = 1; k * SHIFT_STEP_CM1 <= bound + 1e-9; k++)
    shifts.push(k * SHIFT_STEP_CM1, -k * SHIFT_STEP_CM1);
  return shifts;
};

const widthsWithin = (bound: number): number[] =>
  Array.from({ length: 1 + Math.floor(bound / WIDTH_STEP_CM1 + 1e-9) }, (_, k) => k * WIDTH_STEP_CM1);

const unitOf = (values: Float64Array): Float64Array => centredUnit(values) ?? new Float64Array(values.length);

/** Every form of a treated reference that a scan is compared with. */
export function templatesOf(
  reference: Float64Array,
  gridCm1: Float64Array,
  bounds: AlignmentBounds
): Templates {
  const shiftsCm1 = shiftsWithin(bounds.shiftCm1);
  const widthsCm1 = widthsWithin(bounds.widthCm1);
  const units = widthsCm1.map((width) => {
    const broad = broaden(reference, gridCm1, width);
    return shiftsCm1.map((shift) => unitOf(moved(broad, gridCm1, -shift)));
  });
  return { gridCm1, shiftsCm1, widthsCm1, units };
}

/**
 * Every form of a treated scan that is compared with a reference.
 * @param noise what the scan's own noise became under the recipe, as `noiseAfterRecipe` gives it
 */
export function scanLevels(
  scan: Float64Array,
  noise: readonly Float64Array[],
  gridCm1: Float64Array,
  bounds: AlignmentBounds
): ScanLevels {
  const widthsCm1 = widthsWithin(bounds.widthCm1);
  const broad = widthsCm1.map((width) => broaden(scan, gridCm1, width));
  const quiet = broad.map((values, w) => {
    const energy = energyOf(noise.map((difference) => broaden(difference, gridCm1, widthsCm1[w])));
    const share = energy / Math.max(centredSquares(values), Number.MIN_VALUE);
    return Math.sqrt(1 - Math.min(MOST_NOISE, share));
  });
  return { widthsCm1, units: broad.map(unitOf), quiet };
}

/**
 * The shift and width within bounds at which scan and reference agree best; the smallest change among equals.
 * @param allowed whether the scan still covers the method's range when moved so far
 */
export function align(
  scan: ScanLevels,
  reference: Templates,
  allowed: (shiftCm1: number) => boolean = () => true
): Alignment {
  const open = reference.shiftsCm1.map((shift) => shift === 0 || allowed(shift));
  let best: Alignment | null = null;
  let bestScore = -Infinity;
  reference.widthsCm1.forEach((width, w) => {
    for (const sign of w === 0 ? [1] : [1, -1]) {
      const level = sign < 0 ? w : 0;
      reference.units[sign < 0 ? 0 : w].forEach((candidate, s) => {
        if (!open[s]) return;
        const correlation = dot(scan.units[level], candidate);
        // Compared as if without noise, or broadening would be chosen for its smoothing alone.
        const score = correlation / scan.quiet[level] - (w === 0 ? 0 : WIDTH_GAIN);
        if (score <= bestScore) return;
        bestScore = score;
        best = { shiftCm1: reference.shiftsCm1[s], widthCm1: sign * width, correlation };
      });
    }
  });
  const { shiftCm1, widthCm1, correlation } = best as unknown as Alignment;
  return { shiftCm1, widthCm1, correlation: withinUnit(correlation) };
}

/** Values read `byCm1` further to the left: a band at x appears at x + byCm1. Ends hold their value. */
function moved(values: Float64Array, gridCm1: Float64Array, byCm1: number): Float64Array {
  if (byCm1 === 0) return values;
  const { stepCm1, segments } = uniformSegments(gridCm1);
  const out = new Float64Array(values.length);
  for (const { start, end } of segments) {
    for (let i = start; i < end; i++) {
      const at = Math.min(end - 1, Math.max(start, i - byCm1 / stepCm1));
      const j = Math.min(end - 2, Math.floor(at));
      out[i] = values[j] + (values[j + 1] - values[j]) * (at - j);
    }
  }
  return out;
}
