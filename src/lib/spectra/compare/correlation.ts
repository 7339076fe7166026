import { dot } from './dotProducts';

/**
 * Pearson correlation r of two spectra on the same axis.
 *
 * Each side is centred and scaled to unit length first (see `centredUnit`), then r is one dot product: the
 * same operations in the same order as a library comparison makes, so that the claimed material and its
 * rivals are measured with one ruler, bit for bit.
 *
 * @returns r in [-1, 1]; 0 when either spectrum is constant (a flat line resembles nothing).
 * @throws RangeError when the lengths differ.
 */
export function correlation(a: Float64Array, b: Float64Array): number {
  if (a.length !== b.length)
    throw new RangeError(`correlation: lengths differ (${a.length} and ${b.length})`);
  const unitA = centredUnit(a);
  const unitB = centredUnit(b);
  return unitA === null || unitB === null ? 0 : withinUnit(dot(unitA, unitB));
}

/**
 * Cosine of the angle between two spectra, without centring: sensitive to a constant offset, unlike r.
 * @returns a value in [-1, 1]; 0 when either is all zero.
 */
export function cosine(a: Float64Array, b: Float64Array): number {
  const product = dot(a, b);
  const length = Math.sqrt(dot(a, a)) * Math.sqrt(dot(b, b));
  return length === 0 ? 0 : withinUnit(product / length);
}

/**
 * The spectrum less its mean, divided by its length, so that dot products of two such are correlations.
 * @returns null when the spectrum is constant, to rounding: it has no direction.
 */
export function centredUnit(values: Float64Array): Float64Array | null {
  const points = values.length;
  let sum = 0;
  let largest = 0;
  for (let i = 0; i < points; i++) {
    sum += values[i];
    largest = Math.max(largest, Math.abs(values[i]));
  }
  const mean = sum / points;
  const unit = new Float64Array(points);
  let squares = 0;
  for (let i = 0; i < points; i++) {
    const centred = values[i] - mean;
    unit[i] = centred;
    squares += centred * centred;
  }
  const length = Math.sqrt(squares);
  // Below this the differences are rounding of the mean, not signal.
  if (!(length > largest * points * Number.EPSILON)) return null;
  for (let i = 0; i < points; i++) unit[i] /= length;
  return unit;
}

/** Rounding can carry a perfect match one unit in the last place past 1; no one should have to read that. */
export function withinUnit(r: number): number {
  return r > 1 ? 1 : r < -1 ? -1 : r;
}
