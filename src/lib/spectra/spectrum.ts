/**
 * The one spectrum type of the product: a Raman shift axis in cm-1, strictly ascending, and an intensity
 * of the same length. Everything above the readers works on this; readers turn whatever arrives into it.
 */
export interface Spectrum {
  /** Raman shift, cm-1, strictly ascending. Anti-Stokes shifts are negative. */
  readonly shiftCm1: Float64Array;
  /** Intensity, counts or arbitrary units. */
  readonly intensity: Float64Array;
}

/** What a file says of how it was measured. A field the file does not state is absent, never guessed. */
export interface Acquisition {
  readonly title?: string;
  readonly excitationNm?: number;
  readonly laserPowerMw?: number;
  readonly integrationTimeMs?: number;
  readonly accumulations?: number;
  readonly resolutionCm1?: number;
  readonly instrumentSerial?: string;
  /** Time as the file states it; a claim, not a record time. */
  readonly statedTime?: string;
}

/** Why a spectrum cannot be used as numbers at all. */
export interface SpectrumFault {
  readonly code:
    'too-few-points' | 'length-mismatch' | 'not-a-number' | 'axis-not-ascending' | 'axis-duplicate';
  readonly message: string;
  /** Zero-based index of the first offending point, where there is one. */
  readonly index?: number;
}

/** The fewest points a spectrum may have: below this no filter or band is meaningful. */
export const MIN_POINTS = 16;

/**
 * Refuses, once and for all, what no later code should have to think about: unequal lengths, too few
 * points, NaN or infinities, an axis that does not strictly ascend.
 * @returns the first fault found, or null when the spectrum is sound.
 */
export function checkSpectrum(spectrum: Spectrum): SpectrumFault | null {
  const { shiftCm1, intensity } = spectrum;
  if (shiftCm1.length !== intensity.length) {
    return {
      code: 'length-mismatch',
      message: `The axis has ${shiftCm1.length} points but there are ${intensity.length} intensities.`
    };
  }
  if (shiftCm1.length < MIN_POINTS) {
    return {
      code: 'too-few-points',
      message: `The spectrum has ${shiftCm1.length} points; at least ${MIN_POINTS} are needed.`
    };
  }
  for (let i = 0; i < shiftCm1.length; i++) {
    if (!Number.isFinite(shiftCm1[i]) || !Number.isFinite(intensity[i])) {
      return { code: 'not-a-number', message: `Point ${i + 1} is not a finite number.`, index: i };
    }
    if (i > 0 && shiftCm1[i] <= shiftCm1[i - 1]) {
      const code = shiftCm1[i] === shiftCm1[i - 1] ? 'axis-duplicate' : 'axis-not-ascending';
      const what = code === 'axis-duplicate' ? 'repeats the Raman shift of' : 'steps back from';
      return { code, message: `Point ${i + 1} ${what} point ${i} (${shiftCm1[i]} cm-1).`, index: i };
    }
  }
  return null;
}
