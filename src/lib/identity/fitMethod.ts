import { nonconformity } from '../spectra/model/conformal';
import { fitClassModel } from '../spectra/model/fitClassModel';
import { findBands } from '../spectra/peaks/find';
import { meanSpectrum, stepReferences } from '../spectra/preprocess/stepReferences';
import { displayPart } from '../spectra/preprocess/recipe';
import { applySteps, parseRecipe } from '../spectra/preprocess/steps';
import { StepRefusal } from '../spectra/preprocess/step';
import type { Spectrum } from '../spectra/spectrum';
import { ENGINE_VERSION } from './engineVersion';
import type { FittedMethod, LabelledReference, MethodDefinition } from './method';
import { withLeastLimits } from './leastLimits';
import { energyOf, noiseAfterRecipe } from './noiseAfterRecipe';
import { correctAxis, instrumentVariants } from './variation';

export type FitOutcome =
  | { readonly ok: true; readonly method: FittedMethod }
  | { readonly ok: false; readonly reasons: readonly string[] };

/** Bands kept for explanation, strongest first cut. */
const MOST_BANDS = 40;

/**
 * Fits a method from its references: recipe, class model with limits, display mean with envelope, bands. The
 * result is plain JSON and self-contained. Reasons against a fit are plain sentences.
 */
export function fitMethod(
  definition: MethodDefinition,
  references: readonly LabelledReference[]
): FitOutcome {
  const recipe = parseRecipe(definition.recipe);
  if (!recipe.ok) return { ok: false, reasons: recipe.faults };
  const reasons = referenceFaults(references);
  if (reasons.length > 0) return { ok: false, reasons };
  try {
    return { ok: true, method: fit(definition, references) };
  } catch (error) {
    if (error instanceof StepRefusal || error instanceof RangeError)
      return { ok: false, reasons: [error.message] };
    throw error;
  }
}

function referenceFaults(references: readonly LabelledReference[]): string[] {
  if (references.length === 0) return ['A method needs at least one accepted reference.'];
  const faults: string[] = [];
  const seen = new Map<string, string>();
  for (const { id, spectrum } of references) {
    if (spectrum.intensity.every((value) => value === spectrum.intensity[0]))
      faults.push(`Reference ${id} is flat: every intensity is the same.`);
    const key = spectrum.intensity.join(',');
    const twin = seen.get(key);
    if (twin !== undefined) faults.push(`References ${twin} and ${id} hold the same intensities.`);
    seen.set(key, id);
  }
  return faults;
}

function fit(definition: MethodDefinition, references: readonly LabelledReference[]): FittedMethod {
  const { criteria, recipe } = definition;
  const corrected = references.map((reference) =>
    correctAxis(reference.spectrum, definition.correctAxis ? reference.axisCorrection : null)
  );
  const means = stepReferences(corrected, recipe);
  const rows: Float64Array[] = [];
  const sources: string[] = [];
  corrected.forEach((spectrum, i) => {
    for (const variant of [spectrum, ...instrumentVariants(spectrum)]) {
      const padded = reachOf(variant, spectrum);
      rows.push(applySteps(padded, recipe, means).intensity);
      sources.push(references[i].source);
    }
  });
  const sourceCount = new Set(sources).size;
  const fitted = fitClassModel(rows, {
    components: criteria.components,
    significance: criteria.significance,
    sources
  });
  const model = withLeastLimits(fitted.model, sourceCount);
  const { t2, q } = fitted.heldOut;
  const heldOutNonconformity = Array.from(t2, (value, i) => nonconformity(value, q[i], model.limits));
  const grid = applySteps(corrected[0], recipe, means).shiftCm1;
  const display = displayOf(corrected, definition);
  return {
    schema: 1,
    engineVersion: ENGINE_VERSION,
    definition,
    gridCm1: Array.from(grid),
    stepReferences: means.map(({ shiftCm1, intensity }) => ({
      shiftCm1: Array.from(shiftCm1),
      intensity: Array.from(intensity)
    })),
    model,
    noiseEnergy: meanNoise(corrected, recipe, means),
    heldOutNonconformity: heldOutNonconformity.sort((a, b) => a - b),
    ...display,
    referenceCount: references.length,
    sourceCount,
    cautions: [...fewReferences(references.length, sourceCount), ...fitted.cautions]
  };
}

function meanNoise(
  spectra: readonly Spectrum[],
  recipe: MethodDefinition['recipe'],
  means: readonly Spectrum[]
): number {
  const range = recipe.find((step) => step.name === 'resample')?.options as {
    fromCm1: number;
    toCm1: number;
  };
  const treatment = { recipe, stepReferences: means, range };
  const energies = spectra.map((spectrum) =>
    energyOf(noiseAfterRecipe(spectrum, applySteps(spectrum, recipe, means).intensity, treatment))
  );
  return energies.reduce((sum, value) => sum + value, 0) / energies.length;
}

/** A shifted variant still covers what its original covers: the end points are stretched to the original's ends. */
function reachOf(variant: Spectrum, original: Spectrum): Spectrum {
  const last = original.shiftCm1.length - 1;
  const shiftCm1 = variant.shiftCm1.slice();
  if (shiftCm1[0] > original.shiftCm1[0]) shiftCm1[0] = original.shiftCm1[0];
  if (shiftCm1[last] < original.shiftCm1[last]) shiftCm1[last] = original.shiftCm1[last];
  return { shiftCm1, intensity: variant.intensity };
}

function fewReferences(count: number, sources: number): string[] {
  const cautions: string[] = [];
  if (count < 6)
    cautions.push(
      `The limits rest on ${count} ${count === 1 ? 'reference' : 'references'}, widened by what instruments may differ; at least 6 would let the material itself set them.`
    );
  if (sources < 3)
    cautions.push(
      `The references come from ${sources} ${sources === 1 ? 'lot' : 'lots'}; what other lots look like is not known. Add references of more lots.`
    );
  return cautions;
}

/** Mean, envelope and bands as a person sees them: baseline-corrected, the mean scaled to unit height. */
function displayOf(spectra: readonly Spectrum[], definition: MethodDefinition) {
  const recipe = displayPart(definition.recipe);
  const shown = spectra.map((spectrum) => applySteps(spectrum, recipe)).map(unitHeight);
  const mean = meanSpectrum(shown);
  const top = Math.max(...mean.intensity);
  const low = mean.intensity.map((_, i) => Math.min(...shown.map((spectrum) => spectrum.intensity[i])) / top);
  const high = mean.intensity.map(
    (_, i) => Math.max(...shown.map((spectrum) => spectrum.intensity[i])) / top
  );
  const scaled: Spectrum = { shiftCm1: mean.shiftCm1, intensity: mean.intensity.map((value) => value / top) };
  const bands = findBands(scaled)
    .sort((a, b) => b.prominence - a.prominence)
    .slice(0, MOST_BANDS)
    .map((band) => ({ shiftCm1: band.shiftCm1, relativeHeight: band.height, fwhmCm1: band.fwhmCm1 }))
    .sort((a, b) => a.shiftCm1 - b.shiftCm1);
  return {
    bands,
    displayGridCm1: Array.from(scaled.shiftCm1),
    displayMean: Array.from(scaled.intensity),
    displayLow: Array.from(low),
    displayHigh: Array.from(high)
  };
}

function unitHeight(spectrum: Spectrum): Spectrum {
  const top = spectrum.intensity.reduce((most, value) => Math.max(most, value), 0);
  if (!(top > 0)) throw new StepRefusal('zero-variance', 'A reference has no band above its baseline.');
  return { shiftCm1: spectrum.shiftCm1, intensity: spectrum.intensity.map((value) => value / top) };
}
