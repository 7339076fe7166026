import { resampleGrid } from '../spectra/preprocess/resample';
import type { Spectrum } from '../spectra/spectrum';

/**
 * Bands of polyethylene, the commonest liner: cm-1, relative height, full width (1063, 1129, 1295, 1416, 1440 and
 * 1460 are the C-C stretching, CH2 twisting and CH2 bending bands; positions from memory, in agreement within 2 cm-1
 * with an openly licensed measured spectrum).
 */
export const LINER_BANDS: readonly (readonly [shiftCm1: number, height: number, fwhmCm1: number])[] = [
  [1063, 0.75, 10],
  [1129, 0.6, 10],
  [1170, 0.1, 12],
  [1295, 1, 9],
  [1370, 0.06, 12],
  [1416, 0.4, 10],
  [1440, 0.95, 14],
  [1460, 0.45, 18]
];

/** A bare liner on a method's grid, as Lorentzian bands. */
export function linerSpectrum(grid: {
  readonly fromCm1: number;
  readonly toCm1: number;
  readonly stepCm1: number;
}): Spectrum {
  const shiftCm1 = resampleGrid(grid);
  const intensity = shiftCm1.map((x) => {
    let sum = 0;
    for (const [centre, height, fwhm] of LINER_BANDS) {
      const u = (2 * (x - centre)) / fwhm;
      sum += height / (1 + u * u);
    }
    return sum;
  });
  return { shiftCm1, intensity };
}
