import type { Spectrum } from '../spectrum';
import { applyStep, needsReference, type StepSpec } from './steps';

/**
 * The mean of a method's references at each point of its recipe where a step needs it (msc), in order: what a
 * fitted method freezes and gives to `applySteps` for every later scan.
 * @param references spectra before the recipe, at least one
 * @throws StepRefusal as `applySteps` does
 */
export function stepReferences(references: readonly Spectrum[], recipe: readonly StepSpec[]): Spectrum[] {
  const means: Spectrum[] = [];
  if (!recipe.some(needsReference)) return means;
  let current = references;
  for (const spec of recipe) {
    const reference = needsReference(spec) ? meanSpectrum(current) : undefined;
    if (reference !== undefined) means.push(reference);
    current = current.map((spectrum) => applyStep(spectrum, spec, { reference }));
  }
  return means;
}

/** Point-by-point mean of spectra on one axis. */
export function meanSpectrum(spectra: readonly Spectrum[]): Spectrum {
  if (spectra.length === 0) throw new Error('The mean of no spectra is not defined.');
  const { shiftCm1 } = spectra[0];
  const intensity = new Float64Array(shiftCm1.length);
  for (const spectrum of spectra) {
    if (spectrum.intensity.length !== intensity.length)
      throw new Error('Spectra of unequal length have no mean.');
    for (let i = 0; i < intensity.length; i++) intensity[i] += spectrum.intensity[i];
  }
  for (let i = 0; i < intensity.length; i++) intensity[i] /= spectra.length;
  return { shiftCm1, intensity };
}
