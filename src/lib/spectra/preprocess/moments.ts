/**
 * Whether a standard deviation is so small beside the mean that it is rounding, not signal. (Values far larger than
 * the mean have a deviation to match, so the mean stands for their size.)
 */
export function isFlat(deviation: number, centre: number): boolean {
  return !(deviation > 1e-12 * Math.abs(centre));
}

/** Arithmetic mean; values are summed in their order. */
export function mean(values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i];
  return sum / values.length;
}

/** Sum of squared distances from `centre`. */
export function squaresAbout(values: Float64Array, centre: number): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) {
    const d = values[i] - centre;
    sum += d * d;
  }
  return sum;
}
