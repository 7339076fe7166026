import { correlation } from '../spectra/compare/correlation';
import { bestRivals, type RivalScore } from '../spectra/compare/rivals';
import { applySteps } from '../spectra/preprocess/steps';
import type { Spectrum } from '../spectra/spectrum';
import { noisyDistances } from './noisyDistances';
import type { PreparedMethod, PreparedRivals } from './prepared';
import { correctAxis } from './variation';

/** A scan measured against its method: numbers only, no judgement. */
export interface Measurement {
  readonly correlation: number;
  readonly searchedShiftCm1: number;
  /** Both distances with allowance for noise beyond the references' own. */
  readonly t2: number;
  readonly q: number;
  readonly rivals: readonly RivalScore[];
  readonly linerCorrelation: number;
  readonly display: DisplayComparison;
}

/** The scan over its reference as a person sees them, on the display grid. */
export interface DisplayComparison {
  /** Scan scaled to fit the reference mean best. */
  readonly scan: Float64Array;
  readonly residual: Float64Array;
  /** Excess over the references' envelope (positive) or what is missing under it (negative), smoothed. */
  readonly outside: Float64Array;
  readonly largestUnexplained: number;
  readonly largestMissing: number;
}

/** How many rivals are ranked for the explanation. */
const RANKED = 5;
/** Step of the bounded search for a residual shift, cm-1. */
const SEARCH_STEP_CM1 = 0.5;
/** Bands may stand this far from the reference's place before they count as another band, cm-1. */
const ENVELOPE_REACH_CM1 = 4;
/** Heights outside the envelope are averaged over this many points on each side. */
const SMOOTH = 2;

/** @throws StepRefusal when the recipe cannot treat the scan */
export function measure(scan: Spectrum, method: PreparedMethod, rivals: PreparedRivals): Measurement {
  const { definition } = method.fitted;
  const best = bestShift(scan, method, definition.shiftSearchCm1);
  const moved = correctAxis(scan, null, best.shiftCm1);
  const { t2, q } = noisyDistances(moved, best.treated, method);
  return {
    correlation: best.correlation,
    searchedShiftCm1: best.shiftCm1,
    t2,
    q,
    rivals: bestRivals(best.treated, rivals.matrix, RANKED),
    linerCorrelation: method.liner === null ? 0 : correlation(best.treated, method.liner),
    display: compareDisplay(moved, method)
  };
}

interface Shifted {
  readonly shiftCm1: number;
  readonly treated: Float64Array;
  readonly correlation: number;
}

/** The residual shift within the bound at which the scan agrees best; nearest to zero among equals. */
function bestShift(scan: Spectrum, method: PreparedMethod, boundCm1: number): Shifted {
  const at = (shiftCm1: number): Shifted | null => {
    const moved = correctAxis(scan, null, shiftCm1);
    if (shiftCm1 !== 0 && !covers(moved, method)) return null;
    const treated = applySteps(moved, method.fitted.definition.recipe, method.stepReferences).intensity;
    return { shiftCm1, treated, correlation: correlation(treated, method.model.mean) };
  };
  let best = at(0) as Shifted;
  const steps = Math.floor(boundCm1 / SEARCH_STEP_CM1 + 1e-9);
  for (let k = 1; k <= steps; k++) {
    for (const sign of [1, -1]) {
      const candidate = at(sign * k * SEARCH_STEP_CM1);
      if (candidate !== null && candidate.correlation > best.correlation) best = candidate;
    }
  }
  return best;
}

const covers = ({ shiftCm1 }: Spectrum, { range }: PreparedMethod): boolean =>
  shiftCm1[0] <= range.fromCm1 && shiftCm1[shiftCm1.length - 1] >= range.toCm1;

/** Fits the scan to the reference mean by one factor and looks for what lies outside the references' envelope. */
export function compareDisplay(scan: Spectrum, method: PreparedMethod): DisplayComparison {
  const { display } = method;
  const shown = applySteps(scan, display.recipe).intensity;
  let together = 0;
  let own = 0;
  for (let i = 0; i < shown.length; i++) {
    together += shown[i] * display.mean[i];
    own += shown[i] * shown[i];
  }
  const factor = own > 0 ? Math.max(0, together / own) : 0;
  const scaled = shown.map((value) => value * factor);
  const residual = scaled.map((value, i) => value - display.mean[i]);
  const outside = smooth(outsideEnvelope(scaled, method));
  let largestUnexplained = 0;
  let largestMissing = 0;
  for (const value of outside) {
    largestUnexplained = Math.max(largestUnexplained, value);
    largestMissing = Math.max(largestMissing, -value);
  }
  return { scan: scaled, residual, outside, largestUnexplained, largestMissing };
}

function outsideEnvelope(scan: Float64Array, { display }: PreparedMethod): Float64Array {
  const { gridCm1, low, high } = display;
  const step = gridCm1.length > 1 ? gridCm1[1] - gridCm1[0] : 1;
  const reach = Math.max(1, Math.round(ENVELOPE_REACH_CM1 / step));
  return scan.map((value, i) => {
    let ceiling = -Infinity;
    let floor = Infinity;
    for (let j = Math.max(0, i - reach); j <= Math.min(scan.length - 1, i + reach); j++) {
      ceiling = Math.max(ceiling, high[j]);
      floor = Math.min(floor, low[j]);
    }
    return value > ceiling ? value - ceiling : value < floor ? value - floor : 0;
  });
}

function smooth(values: Float64Array): Float64Array {
  return values.map((_, i) => {
    let sum = 0;
    for (let j = i - SMOOTH; j <= i + SMOOTH; j++) sum += values[Math.min(values.length - 1, Math.max(0, j))];
    return sum / (2 * SMOOTH + 1);
  });
}
