import { noOptions } from './option';
import { squaresAbout } from './moments';
import { StepRefusal, type PreprocessStep } from './step';

/** Scales a spectrum to Euclidean length 1, its origin unmoved: 3 4 gives 0.6 0.8. */
export const unitVector: PreprocessStep<'unit-vector', typeof noOptions> = {
  name: 'unit-vector',
  version: 1,
  kind: 'scaling',
  title: 'Unit vector',
  source: 'Division by the Euclidean norm; common practice',
  options: noOptions,
  defaults: {},
  apply({ shiftCm1, intensity }) {
    const norm = Math.sqrt(squaresAbout(intensity, 0));
    if (!(norm > 0)) throw new StepRefusal('zero-variance', 'The spectrum is zero at every point.');
    const out = new Float64Array(intensity.length);
    for (let i = 0; i < out.length; i++) out[i] = intensity[i] / norm;
    return { shiftCm1, intensity: out };
  }
};
