import type { Spectrum } from '../spectrum';
import { isFlat, mean, squaresAbout } from './moments';
import { noOptions } from './option';
import { StepRefusal, type PreprocessStep } from './step';

/**
 * Multiplicative scatter correction: Geladi, MacDougall & Martens, Applied Spectroscopy 39:491 (1985). The spectrum
 * is regressed on the method's mean reference, x = a + b ref, and (x - a) / b is kept.
 *
 * Where b is negative this divides by |b| instead: dividing by b would turn the spectrum upside down and make a
 * material that runs against the reference look like it.
 *
 * Worked example: reference 1 2 3 4 5, x = 2.9 5.1 7 9.1 10.9: b = 2, a = 1, result 0.95 2.05 3 4.05 4.95.
 */
export const msc: PreprocessStep<'msc', typeof noOptions> = {
  name: 'msc',
  version: 1,
  kind: 'scaling',
  title: 'Multiplicative scatter correction',
  source: 'Geladi, MacDougall & Martens, Appl. Spectrosc. 39:491 (1985)',
  options: noOptions,
  defaults: {},
  apply(spectrum, _options, { reference }) {
    const { slope, intercept } = regressOn(spectrum, reference);
    const out = new Float64Array(spectrum.intensity.length);
    const divisor = Math.abs(slope);
    for (let i = 0; i < out.length; i++) out[i] = (spectrum.intensity[i] - intercept) / divisor;
    return { shiftCm1: spectrum.shiftCm1, intensity: out };
  }
};

/** Least-squares line of the spectrum over the reference, point by point. */
function regressOn(
  { shiftCm1, intensity }: Spectrum,
  reference: Spectrum | undefined
): { slope: number; intercept: number } {
  if (reference === undefined || !sameAxis(shiftCm1, reference.shiftCm1)) {
    throw new StepRefusal(
      'no-reference',
      reference === undefined
        ? 'Multiplicative scatter correction needs the mean reference of the method, and none was given.'
        : 'The mean reference of the method lies on another axis than this spectrum.'
    );
  }
  const ref = reference.intensity;
  const centre = mean(intensity);
  const refCentre = mean(ref);
  const refSquares = squaresAbout(ref, refCentre);
  let products = 0;
  for (let i = 0; i < ref.length; i++) products += (ref[i] - refCentre) * (intensity[i] - centre);
  const slope = products / refSquares;
  const refDeviation = Math.sqrt(refSquares / ref.length);
  const flatRef = isFlat(refDeviation, refCentre);
  if (flatRef || isFlat(Math.abs(slope) * refDeviation, centre)) {
    throw new StepRefusal(
      'zero-variance',
      flatRef
        ? 'The mean reference of the method is flat.'
        : 'The spectrum has nothing in common with the reference.'
    );
  }
  return { slope, intercept: centre - slope * refCentre };
}

function sameAxis(a: Float64Array, b: Float64Array): boolean {
  if (a === b) return true;
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return false;
  return true;
}
