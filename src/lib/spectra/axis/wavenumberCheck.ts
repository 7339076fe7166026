import type { BandFit } from '../peaks/fit';
import { noiseLevel } from '../peaks/noise';
import type { Spectrum } from '../spectrum';
import { fitAxis, type AxisCorrection, type AxisFit, type AxisPoint } from './axisFit';
import { locateBand, reachBetween } from './locateBand';
import { instrumentWidth, type Resolution } from './resolution';

/** A shift standard: its bands as published. Data, with its source, kept by the caller. */
export interface WavenumberStandard {
  readonly name: string;
  readonly bands: readonly StandardBand[];
}

export interface StandardBand {
  readonly shiftCm1: number;
  /** Published standard deviation of the position, cm-1. */
  readonly sdCm1?: number;
  /** Natural width at half height, cm-1: lets the instrument's own resolution be told from the band's. */
  readonly naturalFwhmCm1?: number;
}

/** Allowed deviation of one band. A standard's bands without a tolerance inform the fit but are not judged. */
export interface BandTolerance {
  readonly shiftCm1: number;
  readonly toleranceCm1: number;
}

export interface CheckedBand {
  readonly expectedCm1: number;
  /** null: no band stands out of the noise there, or the axis does not reach it. */
  readonly foundCm1: number | null;
  /** Standard error of the found position, cm-1. */
  readonly errorCm1: number | null;
  readonly deviationCm1: number | null;
  readonly fwhmCm1: number | null;
  readonly toleranceCm1: number | null;
  /** null where the band has no tolerance: not judged. */
  readonly within: boolean | null;
}

export interface WavenumberCheck {
  readonly standard: string;
  readonly bands: readonly CheckedBand[];
  readonly axis: AxisFit;
  readonly correction: AxisCorrection;
  readonly resolution: Resolution | null;
  /** Every judged band was found and lies within its tolerance, and at least one was judged. */
  readonly pass: boolean;
  /** What stands in the way of a pass, in plain words. Empty on a pass. */
  readonly reasons: readonly string[];
}

export interface WavenumberOptions {
  /** How far from its published place a band is looked for, cm-1. */
  readonly searchCm1?: number;
  /** Band whose width is reported as the resolution; by default the narrowest found of known natural width. */
  readonly resolutionBandCm1?: number;
}

/** Instruments are off by up to about 10 cm-1; beyond 12 the neighbour's band would be taken. */
const SEARCH_CM1 = 12;
/** Published positions carry about this much where no figure is given. */
const DEFAULT_SD_CM1 = 0.5;
/** Positions nearer than this are the same band of two lists. */
const SAME_BAND_CM1 = 0.5;

/**
 * Checks an instrument's Raman shift axis with a standard: finds each published band, compares its place with
 * the tolerance set, fits the shift and scale that would correct the axis, reads the resolution.
 *
 * The verdict rests on the deviations as measured, never on the corrected axis.
 *
 * @param spectrum of the standard, as measured (no baseline correction or smoothing needed)
 */
export function checkWavenumbers(
  spectrum: Spectrum,
  standard: WavenumberStandard,
  tolerances: readonly BandTolerance[],
  options: WavenumberOptions = {}
): WavenumberCheck {
  const search = options.searchCm1 ?? SEARCH_CM1;
  const noise = noiseLevel(spectrum.intensity);
  const positions = standard.bands.map((band) => band.shiftCm1);
  const bands = standard.bands.map((band) => {
    const fit = locateBand(spectrum, band.shiftCm1, reachBetween(band.shiftCm1, positions, search), noise);
    return judge(band, fit, toleranceOf(band, tolerances));
  });
  const axis = fitAxis(axisPoints(bands, standard));
  const reasons = reasonsAgainst(bands, standard, tolerances);
  return {
    standard: standard.name,
    bands,
    axis,
    correction: axis.correction,
    resolution: resolutionOf(bands, standard, options.resolutionBandCm1),
    pass: reasons.length === 0,
    reasons
  };
}

/**
 * What the correction rests on: the bands the tolerance set judges, where at least three were found (they are
 * the sharp and certain ones), else every band found.
 */
function axisPoints(bands: readonly CheckedBand[], standard: WavenumberStandard): AxisPoint[] {
  const points = (judgedOnly: boolean): AxisPoint[] =>
    bands.flatMap((band, k) => {
      if (band.foundCm1 === null || band.errorCm1 === null || (judgedOnly && band.within === null)) return [];
      const sd = standard.bands[k].sdCm1 ?? DEFAULT_SD_CM1;
      const errorCm1 = Math.sqrt(sd * sd + band.errorCm1 * band.errorCm1);
      return [{ expectedCm1: band.expectedCm1, foundCm1: band.foundCm1, errorCm1 }];
    });
  const judged = points(true);
  return judged.length >= 3 ? judged : points(false);
}

function toleranceOf(band: StandardBand, tolerances: readonly BandTolerance[]): number | null {
  const match = tolerances.find((entry) => Math.abs(entry.shiftCm1 - band.shiftCm1) <= SAME_BAND_CM1);
  return match ? match.toleranceCm1 : null;
}

function judge(band: StandardBand, fit: BandFit | null, tolerance: number | null): CheckedBand {
  const deviation = fit === null ? null : fit.centreCm1 - band.shiftCm1;
  return {
    expectedCm1: band.shiftCm1,
    foundCm1: fit?.centreCm1 ?? null,
    errorCm1: fit?.centreErrorCm1 ?? null,
    deviationCm1: deviation,
    fwhmCm1: fit?.fwhmCm1 ?? null,
    toleranceCm1: tolerance,
    within: tolerance === null ? null : deviation !== null && Math.abs(deviation) <= tolerance
  };
}

function reasonsAgainst(
  bands: readonly CheckedBand[],
  standard: WavenumberStandard,
  tolerances: readonly BandTolerance[]
): string[] {
  const reasons: string[] = [];
  for (const entry of tolerances) {
    if (standard.bands.some((band) => Math.abs(entry.shiftCm1 - band.shiftCm1) <= SAME_BAND_CM1)) continue;
    reasons.push(
      `The tolerance set names a band at ${entry.shiftCm1} cm-1 that ${standard.name} does not have.`
    );
  }
  for (const band of bands) {
    if (band.within !== false) continue;
    reasons.push(
      band.deviationCm1 === null
        ? `The band at ${band.expectedCm1} cm-1 was not found.`
        : `The band at ${band.expectedCm1} cm-1 is off by ${band.deviationCm1.toFixed(2)} cm-1; ${band.toleranceCm1} is allowed.`
    );
  }
  if (bands.every((band) => band.within === null))
    reasons.push('No band of this standard has a tolerance: nothing was judged.');
  return reasons;
}

function resolutionOf(
  bands: readonly CheckedBand[],
  standard: WavenumberStandard,
  wantedCm1: number | undefined
): Resolution | null {
  const readings = bands.flatMap((band, k) => {
    const naturalCm1 = standard.bands[k].naturalFwhmCm1;
    if (band.fwhmCm1 === null) return [];
    const asked =
      wantedCm1 === undefined
        ? naturalCm1 !== undefined
        : Math.abs(band.expectedCm1 - wantedCm1) <= SAME_BAND_CM1;
    return asked ? [{ atCm1: band.expectedCm1, fwhmCm1: band.fwhmCm1, naturalCm1 }] : [];
  });
  if (readings.length === 0) return null;
  const narrowest = readings.reduce((a, b) => (b.fwhmCm1 < a.fwhmCm1 ? b : a));
  const { atCm1, fwhmCm1, naturalCm1 } = narrowest;
  return {
    atCm1,
    fwhmCm1,
    instrumentFwhmCm1: naturalCm1 === undefined ? null : instrumentWidth(fwhmCm1, naturalCm1)
  };
}
