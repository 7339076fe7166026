import { noOptions } from './option';
import { isFlat, mean, squaresAbout } from './moments';
import { StepRefusal, type PreprocessStep } from './step';

/**
 * Standard normal variate: Barnes, Dhanoa & Lister, Applied Spectroscopy 43:772 (1989). Each spectrum less its own
 * mean, over its own standard deviation with divisor n - 1. Takes out laser power, focus and a constant background.
 *
 * Worked example: 1 2 3 4 3 2 1 gives -1.155493 -0.256776 0.641941 1.540658 0.641941 -0.256776 -1.155493.
 */
export const snv: PreprocessStep<'snv', typeof noOptions> = {
  name: 'snv',
  version: 1,
  kind: 'scaling',
  title: 'Standard normal variate',
  source: 'Barnes, Dhanoa & Lister, Appl. Spectrosc. 43:772 (1989)',
  options: noOptions,
  defaults: {},
  apply({ shiftCm1, intensity }) {
    const n = intensity.length;
    const centre = mean(intensity);
    const deviation = Math.sqrt(squaresAbout(intensity, centre) / (n - 1));
    if (isFlat(deviation, centre)) {
      throw new StepRefusal('zero-variance', 'The spectrum is flat: every point has the same intensity.');
    }
    const out = new Float64Array(n);
    for (let i = 0; i < n; i++) out[i] = (intensity[i] - centre) / deviation;
    return { shiftCm1, intensity: out };
  }
};
