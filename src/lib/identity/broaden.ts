import { uniformSegments } from '../spectra/preprocess/segments';

/** Variance of a Gaussian is its full width at half height, squared, over 8 ln 2. */
const WIDTH_TO_VARIANCE = 1 / 5.545177444479562;
/** Variance that one pass of the three-point kernel may add, in points squared: keeps it smooth and positive. */
const PASS_VARIANCE = 0.4;

/**
 * Values as an instrument of lower resolution would have them: convolved with a bell of full width `widthCm1`. The
 * bell is a three-point kernel repeated until its variance is the Gaussian's, so no exponential is taken and the
 * result is the same, bit for bit, everywhere. Uniform runs of the grid are treated each alone.
 */
export function broaden(values: Float64Array, gridCm1: Float64Array, widthCm1: number): Float64Array {
  if (widthCm1 === 0) return values;
  const { stepCm1, segments } = uniformSegments(gridCm1);
  const variance = (widthCm1 * widthCm1 * WIDTH_TO_VARIANCE) / (stepCm1 * stepCm1);
  const passes = Math.max(1, Math.ceil(variance / PASS_VARIANCE));
  const side = variance / passes / 2;
  const out = values.slice();
  for (const { start, end } of segments) {
    for (let pass = 0; pass < passes; pass++) {
      let left = out[start];
      for (let i = start; i < end; i++) {
        const here = out[i];
        const right = i + 1 < end ? out[i + 1] : here;
        out[i] = here + side * (left - 2 * here + right);
        left = here;
      }
    }
  }
  return out;
}

/**
 * A treated spectrum broadened, and brought back to the centred length it had before, as the scaling of a recipe
 * would: with the factor that this took, so that its noise can be followed.
 */
export function broadenTreated(
  values: Float64Array,
  gridCm1: Float64Array,
  widthCm1: number
): { readonly values: Float64Array; readonly factor: number } {
  if (widthCm1 === 0) return { values, factor: 1 };
  const broad = broaden(values, gridCm1, widthCm1);
  const after = centredSquares(broad);
  const factor = after > 0 ? Math.sqrt(centredSquares(values) / after) : 1;
  return { values: broad.map((value) => value * factor), factor };
}

/** Squared length of what is left when the mean is taken off. */
export function centredSquares(values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i];
  const mean = sum / values.length;
  let squares = 0;
  for (let i = 0; i < values.length; i++) squares += (values[i] - mean) * (values[i] - mean);
  return squares;
}
