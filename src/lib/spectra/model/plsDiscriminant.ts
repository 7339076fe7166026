/** A discriminant for one confusable pair: the score is above the threshold for the claimed material. */
export interface PlsDiscriminant {
  readonly coefficients: readonly number[];
  readonly offset: number;
  /** Midway between the two classes' mean scores. */
  readonly threshold: number;
  readonly components: number;
}

/** Score less threshold: positive speaks for the claimed material. */
export function discriminantScore(model: PlsDiscriminant, spectrum: Float64Array): number {
  if (spectrum.length !== model.coefficients.length) {
    throw new RangeError(
      `The discriminant has ${model.coefficients.length} points, the spectrum ${spectrum.length}.`
    );
  }
  return rawScore(model.coefficients, model.offset, spectrum) - model.threshold;
}

/** Score before the threshold is taken off. */
export function rawScore(coefficients: ArrayLike<number>, offset: number, row: Float64Array): number {
  let sum = offset;
  for (let j = 0; j < row.length; j++) sum += coefficients[j] * row[j];
  return sum;
}
