/** A spread below this fraction of the values themselves is rounding, not signal. */
export const FLAT = 1e-12;

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

/** Largest absolute value. */
export function largestMagnitude(values: Float64Array): number {
  let largest = 0;
  for (let i = 0; i < values.length; i++) {
    const magnitude = Math.abs(values[i]);
    if (magnitude > largest) largest = magnitude;
  }
  return largest;
}
