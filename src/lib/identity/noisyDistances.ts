import { classDistances } from '../spectra/model/distances';
import type { ClassAtWidth } from './classAtWidth';
import { energyOf, varianceAlong } from './noiseAfterRecipe';

/** The level of the noise is itself only estimated, from one scan: this much more of it is allowed for. */
const NOISE_ALLOWANCE = 1.25;

export interface NoisyDistances {
  readonly t2: number;
  readonly q: number;
  /** What the class model leaves of the scan, noise included. */
  readonly residual: Float64Array;
}

/**
 * T2 and Q with allowance for the noise a scan has beyond the references' own. Noise is no other material: it adds
 * its variance to every score and its energy to the residual, so the first is added to what scores may vary and the
 * second taken off Q. A scan no noisier than the references gets none.
 *
 * @param seen the scan after the recipe, as it is compared
 * @param noise what its own noise became, as `noiseAfterRecipe` gives it, at the same width
 * @param usualEnergy of the references' noise under the same recipe
 */
export function noisyDistances(
  seen: Float64Array,
  { model }: ClassAtWidth,
  noise: readonly Float64Array[],
  usualEnergy: number
): NoisyDistances {
  const residual = new Float64Array(seen.length);
  const plain = classDistances(model, seen, residual);
  const energy = energyOf(noise);
  if (energy <= usualEnergy) return { ...plain, residual };
  const excess = energy - usualEnergy;
  const added = NOISE_ALLOWANCE * varianceAlong(noise, model.loadings) * (excess / energy);
  const wider = { ...model, eigenvalues: model.eigenvalues.map((value) => value + added) };
  return {
    t2: classDistances(wider, seen).t2,
    q: Math.max(0, plain.q - NOISE_ALLOWANCE * excess),
    residual
  };
}
