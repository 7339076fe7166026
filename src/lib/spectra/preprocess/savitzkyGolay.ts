import { z } from 'zod';
import { wholeOption } from './option';
import { filterWeights, type FilterWeights } from './savitzkyGolayWeights';
import { uniformSegments } from './segments';
import { StepRefusal, type PreprocessStep } from './step';
import { workArray } from './workArray';

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

const shiftedValues = workArray();

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
    for (const { start, end } of segments) {
      const points = end - start;
      if (points < window) {
        throw new StepRefusal(
          'too-few-points',
          `Only ${points} points are left from ${shiftCm1[start].toFixed(1)} cm-1 to the next gap; ` +
            `the filter's window needs ${window}.`
        );
      }
      // A constant passes a smoothing filter and vanishes in a derivative. Taken off first, it costs no digits, and
      // the derivative of a constant is exactly zero.
      const origin = intensity[start];
      const y = shiftedValues(points);
      for (let i = 0; i < points; i++) y[i] = intensity[start + i] - origin;
      filterSegment(y, points, out.subarray(start, end), weights);
      for (let i = start; i < end; i++) out[i] = derivative === 0 ? out[i] + origin : out[i] * perStep;
    }
    return { shiftCm1, intensity: out };
  }
};

/** Filters the first `points` values of `y`, at least a window of them, into `out`; derivatives are per step. */
function filterSegment(
  y: Float64Array,
  points: number,
  out: Float64Array,
  { half, rows }: FilterWeights
): void {
  const window = 2 * half + 1;
  // Near an end, the polynomial of the end's whole window, evaluated off centre.
  for (let t = 0; t < half; t++) {
    out[t] = weigh(y, 0, rows[t]);
    out[points - 1 - t] = weigh(y, points - window, rows[window - 1 - t]);
  }
  const weights = rows[half];
  const last = points - window;
  let first = 0;
  // Four windows side by side: each value is read once for all four.
  for (; first + 3 <= last; first += 4) {
    let a = 0;
    let b = 0;
    let c = 0;
    let d = 0;
    let y0 = y[first];
    let y1 = y[first + 1];
    let y2 = y[first + 2];
    for (let k = 0; k < window; k++) {
      const y3 = y[first + k + 3];
      const weight = weights[k];
      a += weight * y0;
      b += weight * y1;
      c += weight * y2;
      d += weight * y3;
      y0 = y1;
      y1 = y2;
      y2 = y3;
    }
    out[first + half] = a;
    out[first + half + 1] = b;
    out[first + half + 2] = c;
    out[first + half + 3] = d;
  }
  for (; first <= last; first++) out[first + half] = weigh(y, first, weights);
}

function weigh(y: Float64Array, from: number, weights: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < weights.length; k++) sum += weights[k] * y[from + k];
  return sum;
}
