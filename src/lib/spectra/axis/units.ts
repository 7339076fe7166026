/**
 * Raman shift and wavelength. With the excitation wavelength L0 and the scattered wavelength L, both in nm, the
 * shift in cm-1 is 1e7/L0 - 1e7/L: positive for Stokes, negative for anti-Stokes scattering.
 *
 * Example: 785 nm excitation, light at 850 nm: 1e7/785 - 1e7/850 = 974.1476 cm-1.
 */
export const shiftFromWavelength = (excitationNm: number, wavelengthNm: number): number =>
  1e7 / excitationNm - 1e7 / wavelengthNm;

/**
 * Wavelength (nm) at which light of this shift (cm-1) is found; the inverse of the above. The anti-Stokes twin of a
 * band lies at the wavelength of its negative shift.
 */
export const wavelengthFromShift = (excitationNm: number, shiftCm1: number): number =>
  1e7 / (1e7 / excitationNm - shiftCm1);

/** Units in which a file may give its axis. */
export type AxisUnit = 'cm-1' | 'nm' | 'um';

/** Excitation wavelengths (nm) taken as sane: near ultraviolet to near infrared. Anything else is a misread number. */
export const isExcitationNm = (value: number): boolean => value >= 200 && value <= 2000;
