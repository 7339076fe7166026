import { z } from 'zod';
import { wholeOption } from './option';
import { filterWeights, type FilterWeights } from './savitzkyGolayWeights';
import { uniformSegments, type Segment } from './segments';
import { StepRefusal, type PreprocessStep } from './step';

/**
 * Savitzky-Golay smoothing and derivatives: Savitzky & Golay, Analytical Chemistry 36:1627 (1964), as corrected by
 * Steinier, Termonia & Deltour, 44:1906 (1972). Each value is the value, or derivative, at its point of the
 * polynomial fitted to the window around it. Near an end the polynomial of the end's window is evaluated off
 * centre (Gorry, 62:570, 1990), so no point is lost and none is made up. Derivatives are per cm-1, or per cm-1
 * squared: they do not change when the grid is made finer. Each segment of an axis with gaps is filtered alone.
 *
 * Worked example: window 5, order 2, derivative 1 weighs -2 -1 0 1 2 over 10 times the step.
 */
const options = z
  .strictObject({
    window: wholeOption({
      title: 'Window, points',
      description: 'An odd number. Larger windows smooth more and broaden narrow bands.',
      min: 3,
      max: 101
    }).refine((points) => points % 2 === 1, 'Window, points: give an odd number.'),
    order: wholeOption({
      title: 'Order of the polynomial',
      description: 'Larger orders follow narrow bands better and smooth less.',
      min: 0,
      max: 6
    }),
    derivative: wholeOption({
      title: 'Derivative',
      description: '0 smooths, 1 removes a constant background, 2 a sloping one; each raises noise.',
      min: 0,
      max: 2
    })
  })
  .superRefine(({ window, order, derivative }, context) => {
    if (order >= window) {
      const message = 'Order of the polynomial: must be less than the number of points in the window.';
      context.addIssue({ code: 'custom', path: ['order'], message });
    }
    if (derivative > order) {
      const message = 'Derivative: must not be higher than the order of the polynomial.';
      context.addIssue({ code: 'custom', path: ['derivative'], message });
    }
  });

export const savitzkyGolay: PreprocessStep<'savitzky-golay', typeof options> = {
  name: 'savitzky-golay',
  version: 1,
  kind: 'filter',
  title: 'Savitzky-Golay filter',
  source:
    'Savitzky & Golay, Anal. Chem. 36:1627 (1964); Steinier et al. 44:1906 (1972); ends by Gorry 62:570 (1990)',
  options,
  defaults: { window: 15, order: 2, derivative: 1 },
  apply({ shiftCm1, intensity }, { window, order, derivative }) {
    const { stepCm1, segments } = uniformSegments(shiftCm1);
    const weights = filterWeights(window, order, derivative);
    const perStep = derivative === 0 ? 1 : derivative === 1 ? 1 / stepCm1 : 1 / (stepCm1 * stepCm1);
    const out = new Float64Array(intensity.length);
    for (const segment of segments) {
      const points = segment.end - segment.start;
      if (points < window) {
        throw new StepRefusal(
          'too-few-points',
          `Only ${points} points are left from ${shiftCm1[segment.start].toFixed(1)} cm-1 to the next gap; ` +
            `the filter's window needs ${window}.`
        );
      }
      filterMiddle(intensity, out, segment, weights, perStep);
      filterEnds(intensity, out, segment, weights, perStep);
    }
    return { shiftCm1, intensity: out };
  }
};

/**
 * Points with a whole window around them. The weights are symmetric (for derivative 1 antisymmetric), so mirrored
 * points are added (or subtracted) first. A derivative's weights are applied to distances from the middle point,
 * so that the derivative of a constant is exactly zero.
 */
function filterMiddle(
  y: Float64Array,
  out: Float64Array,
  { start, end }: Segment,
  { half, derivative, rows }: FilterWeights,
  perStep: number
): void {
  const weights = rows[half];
  for (let i = start + half; i < end - half; i++) {
    const middle = y[i];
    let sum = derivative === 0 ? weights[half] * middle : 0;
    if (derivative === 0) {
      for (let k = 1; k <= half; k++) sum += weights[half + k] * (y[i + k] + y[i - k]);
    } else if (derivative === 1) {
      for (let k = 1; k <= half; k++) sum += weights[half + k] * (y[i + k] - y[i - k]);
    } else {
      for (let k = 1; k <= half; k++) sum += weights[half + k] * (y[i + k] - middle + (y[i - k] - middle));
    }
    out[i] = sum * perStep;
  }
}

/** The first and last half windows, from the polynomial of the end's whole window. */
function filterEnds(
  y: Float64Array,
  out: Float64Array,
  { start, end }: Segment,
  { half, derivative, rows }: FilterWeights,
  perStep: number
): void {
  const last = 2 * half;
  for (let position = 0; position < half; position++) {
    const mirrored = end - 1 - position;
    out[start + position] = weigh(y, start, rows[position], derivative) * perStep;
    out[mirrored] = weigh(y, end - 1 - last, rows[last - position], derivative) * perStep;
  }
}

function weigh(y: Float64Array, from: number, weights: Float64Array, derivative: number): number {
  const origin = derivative === 0 ? 0 : y[from];
  let sum = 0;
  for (let k = 0; k < weights.length; k++) sum += weights[k] * (y[from + k] - origin);
  return sum;
}
