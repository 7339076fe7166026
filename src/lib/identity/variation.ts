import type { Spectrum } from '../spectra/spectrum';
import type { AxisCorrection } from './method';

/** What may differ between two good measurements of one material on two good instruments. */
const SHIFT_CM1 = 0.8;
const BROADENING_CM1 = 1.6;

/** The axis after correction: measured + shift + scale x measured. */
export function correctAxis(
  spectrum: Spectrum,
  correction: AxisCorrection | null | undefined,
  extraShiftCm1 = 0
): Spectrum {
  if (!correction && extraShiftCm1 === 0) return spectrum;
  const shift = (correction?.shiftCm1 ?? 0) + extraShiftCm1;
  const factor = 1 + (correction?.scale ?? 0);
  return { shiftCm1: spectrum.shiftCm1.map((x) => x * factor + shift), intensity: spectrum.intensity };
}

/**
 * A reference as other instruments would have it: a little to either side, a little broader and a little sharper.
 * Added to the references of a class model, these span the directions in which instruments differ, so that a shift or
 * a resolution within the usual tolerance is no reason to reject; being in pairs, they leave the mean where it was.
 */
export function instrumentVariants(spectrum: Spectrum): Spectrum[] {
  const broad = broadened(spectrum, BROADENING_CM1);
  const sharp = spectrum.intensity.map((value, i) => 2 * value - broad[i]);
  return [
    correctAxis(spectrum, null, SHIFT_CM1),
    correctAxis(spectrum, null, -SHIFT_CM1),
    { shiftCm1: spectrum.shiftCm1, intensity: broad },
    { shiftCm1: spectrum.shiftCm1, intensity: sharp }
  ];
}

/**
 * Intensity broadened by the three-point kernel whose variance is `widthCm1` squared over 8 ln 2 (the second moment
 * of a Gaussian of that full width), repeated until it fits the point spacing.
 */
function broadened({ shiftCm1, intensity }: Spectrum, widthCm1: number): Float64Array {
  const step = (shiftCm1[shiftCm1.length - 1] - shiftCm1[0]) / (shiftCm1.length - 1);
  const variance = (widthCm1 * widthCm1) / 5.545177444479562 / (step * step);
  const passes = Math.max(1, Math.ceil(variance / 0.4));
  const side = variance / passes / 2;
  let from = intensity;
  for (let pass = 0; pass < passes; pass++) {
    const to = new Float64Array(from.length);
    for (let i = 0; i < from.length; i++) {
      const left = from[Math.max(0, i - 1)];
      const right = from[Math.min(from.length - 1, i + 1)];
      to[i] = from[i] + side * (left - 2 * from[i] + right);
    }
    from = to;
  }
  return from;
}
