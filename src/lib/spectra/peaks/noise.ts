/** For a normal variable, standard deviation = median absolute value / this (the 75 % point of the normal). */
const MEDIAN_TO_SD = 0.6744897501960817;

/** Second differences of independent noise have 1 + 4 + 1 times its variance. */
const SECOND_DIFFERENCE_GAIN = Math.sqrt(6);

/**
 * Standard deviation of the noise from point to point: the median absolute second difference, scaled to the
 * sd of the noise. Second differences pass over a sloping baseline and the long tails of Lorentzian bands,
 * which make estimators built on the height of the spectrum read high; the median passes over the bands.
 *
 * It sees only what changes from one point to the next: on a spectrum already smoothed, or interpolated to a
 * finer grid than it was measured on, it reads low. Take it from the spectrum as measured.
 * @returns 0 for fewer than 3 points or a noiseless spectrum
 */
export function noiseLevel(intensity: Float64Array): number {
  const count = intensity.length - 2;
  if (count < 1) return 0;
  const size = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    size[i] = Math.abs(intensity[i] - 2 * intensity[i + 1] + intensity[i + 2]);
  }
  return medianOf(size) / (MEDIAN_TO_SD * SECOND_DIFFERENCE_GAIN);
}

/** A noiseless file would give an infinite ratio, which JSON cannot hold; above this it means nothing anyway. */
const LARGEST_RATIO = 1e6;

export interface SignalToNoise {
  /** Height of the strongest band above the median of the spectrum, as the mean of its three top points. */
  readonly signal: number;
  readonly noise: number;
  /** signal / noise, at most 1e6; 0 for a flat spectrum. */
  readonly ratio: number;
}

/**
 * Signal-to-noise ratio of one spectrum: strongest band over point-to-point noise (one of several definitions
 * in use; every result says which by this name). A spectrum of noise alone reads about 2.
 *
 * @param corrected intensity after baseline correction, for the signal
 * @param measured intensity as measured, same length, for the noise; by default the same vector
 */
export function signalToNoise(corrected: Float64Array, measured: Float64Array = corrected): SignalToNoise {
  const noise = noiseLevel(measured);
  let top = -Infinity;
  for (let i = 1; i + 1 < corrected.length; i++) {
    top = Math.max(top, (corrected[i - 1] + corrected[i] + corrected[i + 1]) / 3);
  }
  const signal = Math.max(0, top - medianOf(Float64Array.from(corrected)));
  const ratio = signal > 0 ? Math.min(LARGEST_RATIO, signal / noise) : 0;
  return { signal, noise, ratio };
}

/** Median; sorts the vector it is given. */
function medianOf(values: Float64Array): number {
  if (values.length === 0) return 0;
  values.sort();
  const middle = values.length >> 1;
  return values.length % 2 === 1 ? values[middle] : (values[middle - 1] + values[middle]) / 2;
}
