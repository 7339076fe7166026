import { shiftFromWavelength, type AxisUnit } from '../axis/units';
import type { Spectrum } from '../spectrum';
import type { ReadProblem } from './format';

export interface Excitation {
  /** As the file states it, nm. */
  readonly stated?: number;
  /** As the user gave it, nm. */
  readonly given?: number;
}

/** How far (nm) the excitation given by the user may be from the one the file states: lasers are sold as 785 nm and measured as 784.6. */
const SAME_LASER_NM = 1;

/**
 * The excitation wavelength to use: the user's, else the file's. Two that are different lasers are refused, since one
 * of them would put every band in the wrong place.
 */
export function excitationOf({
  stated,
  given
}: Excitation): { readonly nm?: number } | { problem: ReadProblem } {
  if (stated === undefined || given === undefined || Math.abs(stated - given) <= SAME_LASER_NM)
    return { nm: given ?? stated };
  const message = `The file states ${stated} nm excitation, but ${given} nm was entered. Choose the right instrument, or the right file.`;
  return { problem: { code: 'check-failed', message } };
}

/**
 * A spectrum with its axis as Raman shift, ascending; notes say what was done to it.
 * @param x axis as the file gives it, in `unit`, ascending or descending
 * @param excitationNm needed when the unit is a wavelength
 */
export function finishAxis(
  x: Float64Array,
  y: Float64Array,
  unit: AxisUnit,
  excitationNm: number | undefined,
  notes: string[]
): { readonly spectrum: Spectrum } | { readonly problem: ReadProblem } {
  const axis = unit === 'cm-1' ? { x } : shiftsOf(x, unit, excitationNm, notes);
  if ('problem' in axis) return axis;
  const n = axis.x.length;
  if (n < 2 || axis.x[0] <= axis.x[n - 1]) return { spectrum: { shiftCm1: axis.x, intensity: y } };
  notes.push('The axis ran from high to low and was turned round.');
  return { spectrum: { shiftCm1: axis.x.slice().reverse(), intensity: y.slice().reverse() } };
}

function shiftsOf(
  x: Float64Array,
  unit: 'nm' | 'um',
  excitationNm: number | undefined,
  notes: string[]
): { readonly x: Float64Array } | { readonly problem: ReadProblem } {
  if (excitationNm === undefined) {
    const message =
      'The axis is a wavelength, but the file does not state the excitation wavelength. Enter it and read the file again.';
    return { problem: { code: 'excitation-needed', message } };
  }
  const low = x.find((wavelength) => wavelength <= 0);
  if (low !== undefined) {
    const message = `The axis is a wavelength, but one of its values is ${low}. Export the spectrum again.`;
    return { problem: { code: 'spectrum-fault', message } };
  }
  const scale = unit === 'um' ? 1000 : 1;
  notes.push(
    `Wavelengths${unit === 'um' ? ' in micrometers' : ''} were turned into Raman shifts with ${excitationNm} nm excitation.`
  );
  return { x: x.map((wavelength) => shiftFromWavelength(excitationNm, wavelength * scale)) };
}
