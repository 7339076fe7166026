import { findBands } from '../spectra/peaks/find';
import { DEFAULT_RECIPE, displayPart } from '../spectra/preprocess/recipe';
import { StepRefusal } from '../spectra/preprocess/step';
import { meanSpectrum } from '../spectra/preprocess/stepReferences';
import { applySteps, type StepSpec } from '../spectra/preprocess/steps';
import type { Spectrum } from '../spectra/spectrum';

/** Room left at each end for an instrument's axis correction, cm-1. */
const END_ROOM_CM1 = 5;
/**
 * C-H stretching: tells polymers and long chains apart, and is where a polyethylene liner shines brightest. On
 * weathered polymers (75 spectra) it takes the best match from 81 to 92 %.
 */
export const STRETCHING_CM1 = { from: 3050, to: 3200 };
/** Bands at least this fraction of the largest have a say in the filter's window. */
const SPEAKING_BAND = 0.2;
/** A window wider than this would smear what a rival may have between the bands, cm-1. */
const WIDEST_WINDOW_CM1 = 31;

/**
 * The default recipe for these references: its grid drawn in to what all of them cover, and the derivative's window
 * as wide as the narrowest of their larger bands where that is wider than the default. A derivative over less than a
 * band takes in noise and nothing else: titanium dioxide's broad bands would then fail for the noise of a scan alone.
 *
 * @param bare nothing lies between probe and material: the C-H stretching bands then count too
 */
export function suggestRecipe(spectra: readonly Spectrum[], bare: boolean): readonly StepSpec[] {
  const from = Math.max(...spectra.map(({ shiftCm1 }) => shiftCm1[0])) + END_ROOM_CM1;
  const to = Math.min(...spectra.map(({ shiftCm1 }) => shiftCm1[shiftCm1.length - 1])) - END_ROOM_CM1;
  const gridded = DEFAULT_RECIPE.map((step) => {
    if (step.name !== 'resample') return step;
    const { fromCm1, toCm1 } = step.options as { fromCm1: number; toCm1: number };
    const most = bare && to >= STRETCHING_CM1.from ? STRETCHING_CM1.to : toCm1;
    const fromTo = { fromCm1: Math.max(fromCm1, Math.ceil(from)), toCm1: Math.min(most, Math.floor(to)) };
    return { ...step, options: { ...step.options, ...fromTo } };
  });
  const narrowest = narrowestBand(spectra, gridded);
  if (narrowest === null) return gridded;
  return gridded.map((step) => {
    if (step.name !== 'savitzky-golay') return step;
    const { window } = step.options as { window: number };
    const wide = Math.min(WIDEST_WINDOW_CM1, narrowest);
    // The default grid has one point for each cm-1; a window has an odd number of points.
    return { ...step, options: { ...step.options, window: Math.max(window, 2 * Math.floor(wide / 2) + 1) } };
  });
}

/** Full width of the narrowest larger band of the mean reference, cm-1; null where none can be told. */
function narrowestBand(spectra: readonly Spectrum[], recipe: readonly StepSpec[]): number | null {
  try {
    const bands = findBands(
      meanSpectrum(spectra.map((spectrum) => applySteps(spectrum, displayPart(recipe))))
    );
    const largest = Math.max(...bands.map((band) => band.prominence));
    const speaking = bands.filter((band) => band.prominence >= SPEAKING_BAND * largest);
    return speaking.length === 0 ? null : Math.min(...speaking.map((band) => band.fwhmCm1));
  } catch (error) {
    if (error instanceof StepRefusal) return null;
    throw error;
  }
}
