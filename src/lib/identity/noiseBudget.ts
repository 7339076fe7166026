import { signalToNoise } from '../spectra/peaks/noise';
import { displayPart } from '../spectra/preprocess/recipe';
import { applySteps, type StepSpec } from '../spectra/preprocess/steps';
import type { Spectrum } from '../spectra/spectrum';
import { energyOf, noiseAfterRecipe } from './noiseAfterRecipe';

/**
 * How much noise costs under a recipe: a scan of signal-to-noise ratio s that differs from its reference by noise
 * alone correlates with it by sqrt(1 - cost / s^2). Broad bands cost more, since a derivative keeps less of them.
 */
export function noiseCost(spectra: readonly Spectrum[], recipe: readonly StepSpec[]): number {
  const { fromCm1, toCm1 } = recipe.find((step) => step.name === 'resample')?.options as {
    fromCm1: number;
    toCm1: number;
  };
  const costs = spectra.map((spectrum) => {
    const treated = applySteps(spectrum, recipe).intensity;
    const range = { fromCm1, toCm1 };
    const energy = energyOf(noiseAfterRecipe(spectrum, treated, { recipe, stepReferences: [], range }));
    const whole = treated.reduce((sum, value) => sum + value * value, 0);
    const raw = spectrum.intensity.filter(
      (_, i) => spectrum.shiftCm1[i] >= fromCm1 && spectrum.shiftCm1[i] <= toCm1
    );
    const shown = applySteps(spectrum, displayPart(recipe)).intensity;
    const { ratio } = signalToNoise(shown, raw);
    return (energy / whole) * ratio * ratio;
  });
  return costs.reduce((sum, value) => sum + value, 0) / costs.length;
}

/** The correlation a scan of this ratio reaches when it differs by noise alone. */
export const correlationAt = (ratio: number, cost: number): number =>
  Math.sqrt(Math.max(0, 1 - cost / (ratio * ratio)));

/** The ratio below which noise alone takes the correlation under a limit. */
export const ratioFor = (minCorrelation: number, cost: number): number =>
  Math.sqrt(cost / (1 - minCorrelation * minCorrelation));
