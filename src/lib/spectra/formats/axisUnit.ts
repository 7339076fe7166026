import type { AxisUnit } from '../axis/units';

/**
 * The unit that the words of a file give its axis, or null when they name none that is known. Raman shift and
 * wavenumber are in cm-1, a bare wavelength is in nm.
 *
 * Example: `Raman shift (cm-1)`, `WAVENUMBER / cm-1`, `1/CM` and `raman_shift_cm1` are cm-1; `NANOMETERS`,
 * `Wavelength`, `lambda [nm]` are nm; `MICROMETERS` is um; `SECONDS` is null.
 */
export function axisUnitOf(text: string): AxisUnit | null {
  const bare = text
    .slice(0, 200)
    .toLowerCase()
    .replaceAll(/[\u2212\u207b]/g, '-')
    .replaceAll('\u00b9', '1')
    .replaceAll(/[\s^(){}[\]_.]/g, '');
  if (/cm-?1|1\/cm|wavenumber|ramanshift|^shift|^raman$/.test(bare)) return 'cm-1';
  if (/[\u00b5\u03bc]m|micromet|micron|^(wavelength|lambda)?[/:,]?um$/.test(bare)) return 'um';
  return /nanomet|wavelength|lambda|^nm$|[^a-z]nm$/.test(bare) ? 'nm' : null;
}

/** Words that name an axis which is no axis of a Raman spectrum at all. */
export const isForeignAxis = (text: string): boolean =>
  /\b(pixels?|index|time|seconds?|minutes?|theta|energy|ev|mass|m\/z|frequency|hz|ppm|retention)\b/i.test(
    text.slice(0, 200)
  );
