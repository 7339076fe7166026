import { correlation } from '../spectra/compare/correlation';
import { bestRivals, type RivalScore } from '../spectra/compare/rivals';
import { applySteps } from '../spectra/preprocess/steps';
import type { Spectrum } from '../spectra/spectrum';
import { findAdmixture, type Admixture } from './admixture';
import { align, scanLevels, templatesOf, type ScanLevels } from './alignment';
import { broaden, broadenTreated, centredSquares } from './broaden';
import { compareDisplay, type DisplayComparison } from './displayComparison';
import { energyOf, noiseAfterRecipe } from './noiseAfterRecipe';
import { noisyDistances } from './noisyDistances';
import type { PreparedMethod, PreparedRivals } from './prepared';
import { correctAxis } from './variation';

/** A scan measured against its method: numbers only, no judgement. */
export interface Measurement {
  readonly correlation: number;
  readonly searchedShiftCm1: number;
  readonly matchedWidthCm1: number;
  /** Both distances with allowance for noise beyond the references' own. */
  readonly t2: number;
  readonly q: number;
  /** Share of the treated scan that is its own noise. */
  readonly noiseShare: number;
  readonly rivals: readonly RivalScore[];
  readonly admixture: Admixture | null;
  readonly linerCorrelation: number;
  readonly display: DisplayComparison;
}

/** How many rivals are ranked for the explanation. */
const RANKED = 5;
/** A rival this far below the claimed material cannot catch up by the same shift and width. */
const CATCH_UP = 0.25;

/** @throws StepRefusal when the recipe cannot treat the scan */
export function measure(scan: Spectrum, method: PreparedMethod, rivals: PreparedRivals): Measurement {
  const { fitted, stepReferences, range, gridCm1, bounds } = method;
  const { recipe } = fitted.definition;
  const treat = (spectrum: Spectrum) => applySteps(spectrum, recipe, stepReferences).intensity;
  const asMeasured = treat(scan);
  const noise = noiseAfterRecipe(scan, asMeasured, { recipe, stepReferences, range });
  const levels = scanLevels(asMeasured, noise, gridCm1, bounds);
  const fit = align(levels, method.templates, (shift) => covers(scan, shift, method));
  const moved = correctAxis(scan, null, fit.shiftCm1);
  const sharper = Math.max(0, -fit.widthCm1);
  const { values: seen, factor } = broadenTreated(
    fit.shiftCm1 === 0 ? asMeasured : treat(moved),
    gridCm1,
    sharper
  );
  const seenNoise = noise.map((difference) =>
    broaden(difference, gridCm1, sharper).map((value) => value * factor)
  );
  const noiseEnergy = energyOf(seenNoise);
  const classThere = method.classAt(Math.max(0, fit.widthCm1));
  const { t2, q, residual } = noisyDistances(seen, classThere, seenNoise, fitted.noiseEnergy ?? 0);
  const own = correlation(seen, classThere.model.mean);
  return {
    correlation: own,
    searchedShiftCm1: fit.shiftCm1,
    matchedWidthCm1: fit.widthCm1,
    t2,
    q,
    noiseShare: Math.min(1, noiseEnergy / centredSquares(seen)),
    rivals: rankRivals(seen, levels, own, method, rivals),
    admixture: findAdmixture({ seen, residual, noiseEnergy }, classThere, rivals),
    linerCorrelation: method.liner === null ? 0 : correlation(seen, method.liner),
    display: compareDisplay(moved, method, fit.widthCm1)
  };
}

/** The most alike other materials; those near the claimed one are given the same freedom of shift and width. */
function rankRivals(
  treated: Float64Array,
  levels: ScanLevels,
  own: number,
  method: PreparedMethod,
  { matrix, rows }: PreparedRivals
): RivalScore[] {
  return bestRivals(treated, matrix, RANKED)
    .map((rival) => {
      if (rival.correlation < own - CATCH_UP) return rival;
      const aligned = align(levels, templatesOf(rows(rival.index), method.gridCm1, method.bounds));
      return { ...rival, correlation: Math.max(rival.correlation, aligned.correlation) };
    })
    .sort((a, b) => b.correlation - a.correlation);
}

function covers({ shiftCm1 }: Spectrum, byCm1: number, { range }: PreparedMethod): boolean {
  return shiftCm1[0] + byCm1 <= range.fromCm1 && shiftCm1[shiftCm1.length - 1] + byCm1 >= range.toCm1;
}
