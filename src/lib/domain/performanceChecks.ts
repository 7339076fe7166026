import type { AxisCorrection } from '../spectra/axis/axisFit';
import { checkWavenumbers, type BandTolerance, type CheckedBand } from '../spectra/axis/wavenumberCheck';
import type { ReadSpectrum } from '../spectra/formats/format';
import { findStandard } from './wavenumberStandards';

/** What a performance check found, as it is stored and shown. */
export interface CheckResult {
  readonly standard: string;
  readonly bands: readonly CheckedBand[];
  readonly passed: boolean;
  /** One sentence on how it came out. */
  readonly sentence: string;
  readonly reasons: readonly string[];
  /** Axis correction fitted to the bands; null where fewer than two bands were found. */
  readonly correction: AxisCorrection | null;
  readonly resolutionCm1: number | null;
}

export type JudgedCheck =
  { readonly ok: true; readonly result: CheckResult } | { readonly ok: false; readonly sentence: string };

/** Excitation wavelengths further apart than this are different lasers, nm. */
const SAME_LASER_NM = 1;

/**
 * Judges a standard's spectrum against a tolerance set. A file of another laser is refused; a spectrum in
 * which the bands are out of place or missing is a failed check.
 */
export function judgeCheck(
  read: ReadSpectrum,
  instrument: { readonly name: string; readonly excitationNm: number },
  tolerances: { readonly standard: string; readonly bands: readonly BandTolerance[] }
): JudgedCheck {
  const standard = findStandard(tolerances.standard);
  if (!standard)
    return { ok: false, sentence: `There are no published bands of ${tolerances.standard} on file.` };
  const stated = read.acquisition.excitationNm;
  if (stated !== undefined && Math.abs(stated - instrument.excitationNm) > SAME_LASER_NM) {
    return {
      ok: false,
      sentence: `The file says ${stated} nm, but ${instrument.name} has ${instrument.excitationNm} nm. Choose the file of this instrument.`
    };
  }
  const check = checkWavenumbers(read.spectrum, standard, tolerances.bands);
  const judged = check.bands.filter((band) => band.within !== null);
  const inside = judged.filter((band) => band.within === true).length;
  const found = check.bands.filter((band) => band.foundCm1 !== null).length;
  return {
    ok: true,
    result: {
      standard: standard.name,
      bands: check.bands,
      passed: check.pass,
      sentence: `${inside} of ${judged.length} bands within tolerance.`,
      reasons: check.reasons,
      correction: found >= 2 ? check.correction : null,
      resolutionCm1: check.resolution?.fwhmCm1 ?? null
    }
  };
}
