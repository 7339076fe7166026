import { classDistances, type ClassDistances } from '../spectra/model/distances';
import type { Spectrum } from '../spectra/spectrum';
import { energyOf, noiseAfterRecipe, varianceAlong } from './noiseAfterRecipe';
import type { PreparedMethod } from './prepared';

/** The level of the noise is itself only estimated, from one scan: this much more of it is allowed for. */
const NOISE_ALLOWANCE = 1.25;

/**
 * T2 and Q with allowance for the noise a scan has beyond the references' own. Noise is no other material: it adds
 * its variance to every score and its energy to the residual, so the first is added to what scores may vary and the
 * second taken off Q. A scan no noisier than the references gets none.
 *
 * @param scan on the axis it was treated on
 * @param treated the scan after the recipe
 * @throws StepRefusal when the recipe cannot treat the scan
 */
export function noisyDistances(
  scan: Spectrum,
  treated: Float64Array,
  method: PreparedMethod
): ClassDistances {
  const { fitted, model, stepReferences, range } = method;
  const plain = classDistances(model, treated);
  if (fitted.noiseEnergy === undefined) return plain;
  const { recipe } = fitted.definition;
  const noise = noiseAfterRecipe(scan, treated, { recipe, stepReferences, range });
  const energy = energyOf(noise);
  if (energy <= fitted.noiseEnergy) return plain;
  const excess = energy - fitted.noiseEnergy;
  const added = NOISE_ALLOWANCE * varianceAlong(noise, model.loadings) * (excess / energy);
  const wider = { ...model, eigenvalues: model.eigenvalues.map((value) => value + added) };
  return {
    t2: classDistances(wider, treated).t2,
    q: Math.max(0, plain.q - NOISE_ALLOWANCE * excess)
  };
}
