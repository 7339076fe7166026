import { shiftFromWavelength } from '../axis/units';

/** Lasers in common use, nm (common practice, no source). */
const USUAL_LASERS_NM = [532, 633, 785, 830, 1064];
/** Shifts that spectra usually begin and end at when their axis is a wavelength: a little before the laser line to the end of the CH stretch. */
const LOWEST_CM1 = -300;
const HIGHEST_START_CM1 = 600;
const HIGHEST_CM1 = 4200;

/**
 * What to tell of an axis whose unit nobody named: that cm-1 was assumed, and whether the values could as well be the
 * wavelengths of some laser's Raman spectrum.
 * @param x axis as the file gives it
 * @param excitationNm where it is known, the only laser that counts
 */
export function wavelengthNote(x: Float64Array, excitationNm: number | undefined): string[] {
  const assumed = 'The file does not state the unit of its axis; cm-1 was assumed.';
  if (x.length < 2) return [assumed];
  const low = Math.min(x[0], x[x.length - 1]);
  const high = Math.max(x[0], x[x.length - 1]);
  const lasers = excitationNm === undefined ? USUAL_LASERS_NM : [excitationNm];
  const laser = lasers.find((nm) => {
    const from = shiftFromWavelength(nm, low);
    const to = shiftFromWavelength(nm, high);
    return low > 0 && from >= LOWEST_CM1 && from <= HIGHEST_START_CM1 && to > from + 300 && to <= HIGHEST_CM1;
  });
  if (laser === undefined) return [assumed];
  return [
    assumed,
    `Its values, ${low} to ${high}, could also be wavelengths in nm of a ${laser} nm laser: if they are, choose nm and read the file again.`
  ];
}
