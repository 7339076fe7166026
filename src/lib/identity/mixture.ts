import { nonNegativeShares } from '../spectra/model/nonNegativeLeastSquares';
import { applySteps } from '../spectra/preprocess/steps';
import { StepRefusal } from '../spectra/preprocess/step';
import type { Explanation } from './decision';
import type { Measurement } from './measure';
import type { PreparedMethod, PreparedRivals } from './prepared';

/** A share below this is not worth naming. */
const LEAST_SHARE = 0.03;

/**
 * Shares of the best other materials beside the claimed one's own mean, by non-negative least squares on the
 * baseline-corrected spectra: an indication only, since heights depend on packing and particle size.
 */
export function estimateMixture(
  measured: Measurement,
  method: PreparedMethod,
  rivals: PreparedRivals
): Explanation['mixture'] {
  const components: { itemCode: string; name: string; intensity: Float64Array }[] = [];
  for (const { index } of measured.rivals.slice(0, 2)) {
    const entry = rivals.entries[index];
    try {
      components.push({
        itemCode: entry.itemCode,
        name: entry.name,
        intensity: unitArea(applySteps(entry.spectrum, method.display.recipe).intensity)
      });
    } catch (error) {
      if (!(error instanceof StepRefusal)) throw error;
    }
  }
  if (components.length === 0) return [];
  const own = unitArea(method.display.mean);
  const fit = nonNegativeShares(measured.display.scan, [
    own,
    ...components.map((component) => component.intensity)
  ]);
  const shares = components.map(({ itemCode, name }, i) => ({
    itemCode,
    name,
    share: fit.shares[i + 1],
    standardError: fit.standardErrors[i + 1]
  }));
  return shares.filter((part) => part.share >= LEAST_SHARE).sort((a, b) => b.share - a.share);
}

function unitArea(values: Float64Array): Float64Array {
  let area = 0;
  for (const value of values) area += Math.max(0, value);
  return area > 0 ? values.map((value) => value / area) : values;
}
