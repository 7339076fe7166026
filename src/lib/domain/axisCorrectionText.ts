import type { AxisCorrection } from '../spectra/axis/axisFit';

const signed = (value: number, digits: number) =>
  `${value < 0 ? '\u2212' : '+'}${Math.abs(value).toFixed(digits)}`;

/**
 * What an instrument's check makes of a measured shift, in words. The stretch is told over 1000 cm-1, where it is a
 * length that can be compared with a tolerance: `−0.40 cm-1, and +0.25 cm-1 in every 1000 cm-1`.
 */
export function axisCorrectionText({ shiftCm1, scale }: AxisCorrection): string {
  const shift = shiftCm1 === 0 ? '' : `${signed(shiftCm1, 2)} cm-1`;
  const stretch = scale === 0 ? '' : `${signed(scale * 1000, 2)} cm-1 in every 1000 cm-1`;
  return [shift, stretch].filter(Boolean).join(', and ') || 'none';
}
