import { findStandard, SUGGESTED_TOLERANCES } from '../../src/lib/domain/wavenumberStandards';
import type { AxisCorrection } from '../../src/lib/identity/method';
import { checkWavenumbers } from '../../src/lib/spectra/axis/wavenumberCheck';
import type { Labelled } from './readFolder';

export interface InstrumentCheck {
  readonly instrument: string;
  readonly file: string;
  /** Within the handheld tolerances as measured. */
  readonly pass: boolean;
  readonly correction: AxisCorrection;
}

/**
 * Axis correction of every spectrum by its own instrument's spectrum of a standard. Where an instrument has several
 * (optics, powers), the one whose file name is the same counts, else its first.
 */
export function axisChecks(spectra: readonly Labelled[], standardName: string): InstrumentCheck[] {
  const standard = findStandard(standardName);
  if (!standard) throw new Error(`There is no standard named ${standardName}.`);
  const tolerances =
    SUGGESTED_TOLERANCES.find((set) => set.standard === standardName && set.name === 'handheld')?.bands ?? [];
  return spectra
    .filter((entry) => entry.material === standardName)
    .map((entry) => {
      const check = checkWavenumbers(entry.spectrum, standard, tolerances);
      const { shiftCm1, scale } = check.correction;
      return {
        instrument: entry.instrument,
        file: fileName(entry),
        pass: check.pass,
        correction: { shiftCm1, scale }
      };
    });
}

export function correctionFor(entry: Labelled, checks: readonly InstrumentCheck[]): AxisCorrection | null {
  const own = checks.filter((check) => check.instrument === entry.instrument);
  return (own.find((check) => check.file === fileName(entry)) ?? own[0])?.correction ?? null;
}

const fileName = ({ path }: Labelled): string => path.split('/').pop() ?? path;
