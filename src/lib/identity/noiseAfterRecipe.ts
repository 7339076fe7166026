import { noiseLevel } from '../spectra/peaks/noise';
import { applySteps, type StepSpec } from '../spectra/preprocess/steps';
import type { Spectrum } from '../spectra/spectrum';
import { seededRandom } from '../spectra/statistics/seededRandom';

/** Any fixed seed: the same made noise for every spectrum, so that a decision stays a function of its inputs. */
const SEED = 20_250_601;
/** Made noise is tried this many times. */
const TRIES = 2;

/** What a treatment works with besides the spectrum. */
export interface Treatment {
  readonly recipe: readonly StepSpec[];
  readonly stepReferences: readonly Spectrum[];
  /** Where the noise is read, cm-1. */
  readonly range: { readonly fromCm1: number; readonly toCm1: number };
}

/**
 * What a spectrum's own noise becomes under a recipe: the recipe is applied to the spectrum and again with made noise
 * of the same point-to-point level on top; the differences are returned, a few of them. Works for any recipe, since
 * grids, filters and scaling change noise in ways that depend on each other.
 * The made noise is independent from point to point; noise that the instrument has smoothed already reads low, which
 * errs on the strict side.
 *
 * @param treated the spectrum after the recipe
 * @returns none for a noiseless spectrum
 * @throws StepRefusal when the recipe cannot treat the spectrum
 */
export function noiseAfterRecipe(
  spectrum: Spectrum,
  treated: Float64Array,
  { recipe, stepReferences, range }: Treatment
): Float64Array[] {
  const { shiftCm1, intensity } = spectrum;
  const level = noiseLevel(
    intensity.filter((_, i) => shiftCm1[i] >= range.fromCm1 && shiftCm1[i] <= range.toCm1)
  );
  if (!(level > 0)) return [];
  const random = seededRandom(SEED);
  return Array.from({ length: TRIES }, () => {
    const noisier = { shiftCm1, intensity: intensity.map((value) => value + level * normal(random)) };
    return applySteps(noisier, recipe, stepReferences).intensity.map((value, i) => value - treated[i]);
  });
}

/** Mean sum of squares of such differences. */
export function energyOf(differences: readonly Float64Array[]): number {
  let sum = 0;
  for (const difference of differences) for (const value of difference) sum += value * value;
  return differences.length === 0 ? 0 : sum / differences.length;
}

/** Mean square of such differences along unit directions: the variance noise adds to a score. */
export function varianceAlong(
  differences: readonly Float64Array[],
  directions: readonly Float64Array[]
): number {
  let sum = 0;
  for (const difference of differences) {
    for (const direction of directions) {
      let along = 0;
      for (let j = 0; j < difference.length; j++) along += difference[j] * direction[j];
      sum += along * along;
    }
  }
  const count = differences.length * directions.length;
  return count === 0 ? 0 : sum / count;
}

/** Standard normal from twelve uniforms: no transcendental function, so the same everywhere. */
function normal(random: () => number): number {
  let sum = -6;
  for (let k = 0; k < 12; k++) sum += random();
  return sum;
}
