import type { Spectrum } from '$lib/spectra/spectrum';

/**
 * A curve made of +, -, x, / alone, so that it has the same bits everywhere: a bent background, two Lorentzian
 * bands and a fixed pattern of ripple. tests/spectra/preprocess/frozenFigures.py makes the same one.
 */
export function rippledCurve(stepCm1 = 1, points = 120): Spectrum {
  const shiftCm1 = Float64Array.from({ length: points }, (_, i) => 400 + i * stepCm1);
  const intensity = shiftCm1.map((_, i) => {
    const background = 50 + (0.02 * (i - 40) * (i - 40)) / 4;
    const bands = 90 / (1 + ((i - 30) / 3) * ((i - 30) / 3)) + 60 / (1 + ((i - 75) / 5) * ((i - 75) / 5));
    return background + bands + (((i * 37) % 11) - 5) * 0.4;
  });
  return { shiftCm1, intensity };
}

/** A spectrum on a uniform axis from its values. */
export function onUniformAxis(values: ArrayLike<number>, stepCm1 = 1, fromCm1 = 400): Spectrum {
  const intensity = Float64Array.from(values);
  return { shiftCm1: intensity.map((_, i) => fromCm1 + i * stepCm1), intensity };
}

/** Largest distance between two arrays, as a fraction of the largest magnitude in the expected one. */
export function relativeDistance(actual: ArrayLike<number>, expected: ArrayLike<number>): number {
  if (actual.length !== expected.length) return Infinity;
  let distance = 0;
  let size = 0;
  for (let i = 0; i < expected.length; i++) {
    distance = Math.max(distance, Math.abs(actual[i] - expected[i]));
    size = Math.max(size, Math.abs(expected[i]));
  }
  return Number.isNaN(distance) ? Infinity : distance / (size || 1);
}
