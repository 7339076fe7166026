/** Corrected shift = measured + shiftCm1 + scale * measured (scale near 0). */
export interface AxisCorrection {
  readonly shiftCm1: number;
  readonly scale: number;
}

/** One band of a standard as it was found. */
export interface AxisPoint {
  readonly expectedCm1: number;
  readonly foundCm1: number;
  /** Standard uncertainty of the difference, cm-1. */
  readonly errorCm1: number;
}

export interface AxisFit {
  readonly correction: AxisCorrection;
  /** What was fitted: a scale needs three bands spread over at least 500 cm-1, and to stand out of its error. */
  readonly form: 'none' | 'shift' | 'shift and scale';
  /** Root mean square of what is left after correction, bands used only, cm-1. */
  readonly rmsCm1: number;
  /** Standard error of the corrected axis at the middle of the bands, cm-1. */
  readonly errorCm1: number;
  /** Position in the list of the one band set aside as an outlier, or null. */
  readonly leftOut: number | null;
}

const LEAST_SPAN_CM1 = 500;

/** A scale smaller than this many of its standard errors is left out: it would correct what is not there. */
const SCALE_ERRORS = 2;

/** A band this many times further off than the others scatter is set aside (at most one, of at least five). */
const OUTLIER_RATIO = 5;

/**
 * Fits expected - found = shift + scale * found by weighted least squares: the correction that brings an
 * instrument's axis onto the standard's. One band that disagrees with all the others (an overlapped or
 * misread one) is set aside, if leaving it out shrinks the scatter far beyond chance; it still counts in the
 * check's verdict.
 */
export function fitAxis(points: readonly AxisPoint[]): AxisFit {
  if (points.length === 0) {
    return { correction: { shiftCm1: 0, scale: 0 }, form: 'none', rmsCm1: 0, errorCm1: 0, leftOut: null };
  }
  const all = weightedFit(points);
  if (points.length < 5) return { ...all, leftOut: null };
  let best = all;
  let leftOut: number | null = null;
  points.forEach((_, index) => {
    const rest = weightedFit(points.filter((_point, other) => other !== index));
    if (rest.rmsCm1 < best.rmsCm1) {
      best = rest;
      leftOut = index;
    }
  });
  if (leftOut === null) return { ...all, leftOut: null };
  const odd = points[leftOut];
  const off = Math.abs(residualOf(odd, best.correction));
  const scatter = Math.max(best.rmsCm1, odd.errorCm1);
  return off > OUTLIER_RATIO * scatter ? { ...best, leftOut } : { ...all, leftOut: null };
}

/** A measured shift brought onto the true axis. */
export function correctShift(measuredCm1: number, correction: AxisCorrection): number {
  return measuredCm1 + correction.shiftCm1 + correction.scale * measuredCm1;
}

function residualOf(point: AxisPoint, correction: AxisCorrection): number {
  return point.expectedCm1 - correctShift(point.foundCm1, correction);
}

function weightedFit(points: readonly AxisPoint[]): Omit<AxisFit, 'leftOut'> {
  const m = weightedMoments(points);
  const shiftOnly = { shiftCm1: m.meanY, scale: 0 };
  const wideEnough = points.length >= 3 && m.span >= LEAST_SPAN_CM1;
  const scale = wideEnough ? m.cross / m.spread : 0;
  const scaled = { shiftCm1: m.meanY - scale * m.meanX, scale };
  // The published errors or the scatter actually seen, whichever is larger.
  const scatter = Math.max(1, Math.sqrt(weightedSquares(points, scaled) / Math.max(1, points.length - 2)));
  const stands = wideEnough && Math.abs(scale) > (SCALE_ERRORS * scatter) / Math.sqrt(m.spread);
  const correction = stands ? scaled : shiftOnly;
  let squares = 0;
  for (const point of points) squares += residualOf(point, correction) ** 2;
  return {
    correction,
    form: stands ? 'shift and scale' : 'shift',
    rmsCm1: Math.sqrt(squares / Math.max(1, points.length - (stands ? 2 : 1))),
    errorCm1: scatter / Math.sqrt(m.weights)
  };
}

function weightedSquares(points: readonly AxisPoint[], correction: AxisCorrection): number {
  let sum = 0;
  for (const point of points) sum += (residualOf(point, correction) / point.errorCm1) ** 2;
  return sum;
}

/** Weighted means and sums of squares of found shift (x) and expected - found (y). */
function weightedMoments(points: readonly AxisPoint[]) {
  let weights = 0;
  let meanX = 0;
  let meanY = 0;
  let low = Infinity;
  let high = -Infinity;
  for (const { expectedCm1, foundCm1, errorCm1 } of points) {
    const weight = 1 / (errorCm1 * errorCm1);
    weights += weight;
    meanX += weight * foundCm1;
    meanY += weight * (expectedCm1 - foundCm1);
    low = Math.min(low, foundCm1);
    high = Math.max(high, foundCm1);
  }
  meanX /= weights;
  meanY /= weights;
  let spread = 0;
  let cross = 0;
  for (const { expectedCm1, foundCm1, errorCm1 } of points) {
    const weight = 1 / (errorCm1 * errorCm1);
    const dx = foundCm1 - meanX;
    spread += weight * dx * dx;
    cross += weight * dx * (expectedCm1 - foundCm1 - meanY);
  }
  return { weights, meanX, meanY, spread, cross, span: high - low };
}
