import { shiftFromWavelength } from '../axis/units';
import type { Spectrum } from '../spectrum';
import type { ReadProblem } from './format';

/** A spectrum with its axis as Raman shift, ascending; notes say what was done to it. */
export function finishAxis(
  x: Float64Array,
  y: Float64Array,
  unit: 'cm-1' | 'nm',
  excitationNm: number | undefined,
  notes: string[]
): { readonly spectrum: Spectrum } | { readonly problem: ReadProblem } {
  let axis = x;
  if (unit === 'nm') {
    if (excitationNm === undefined) {
      return {
        problem: {
          code: 'excitation-needed',
          message:
            'The axis is a wavelength, but the file does not state the excitation wavelength. Enter it and read the file again.'
        }
      };
    }
    axis = x.map((wavelength) => shiftFromWavelength(excitationNm, wavelength));
    notes.push(`Wavelengths were turned into Raman shifts with ${excitationNm} nm excitation.`);
  }
  const turned = ascending({ shiftCm1: axis, intensity: y });
  if (turned.turned) notes.push('The axis ran from high to low and was turned round.');
  return { spectrum: turned.spectrum };
}

/** A spectrum whose axis descends, turned round; one that ascends as it is. */
function ascending(spectrum: Spectrum): { readonly spectrum: Spectrum; readonly turned: boolean } {
  const { shiftCm1, intensity } = spectrum;
  if (shiftCm1.length < 2 || shiftCm1[0] <= shiftCm1[shiftCm1.length - 1]) return { spectrum, turned: false };
  return {
    spectrum: { shiftCm1: shiftCm1.slice().reverse(), intensity: intensity.slice().reverse() },
    turned: true
  };
}
