import { centredUnit, withinUnit } from './correlation';
import { dotProducts } from './dotProducts';

/** A library ready for comparison: every row centred and of unit length, so that r is a dot product. */
export interface RivalMatrix {
  readonly count: number;
  readonly points: number;
  /** Row-major, count x points. A constant spectrum is a row of zeros: it correlates with nothing. */
  readonly rows: Float64Array;
}

export interface RivalScore {
  /** Row of the library matrix. */
  readonly index: number;
  readonly correlation: number;
}

/**
 * Packs spectra on one common axis for `bestRivals`.
 * @param spectra equal-length intensity vectors, after the recipe of the method that will use them
 */
export function packRivals(spectra: readonly Float64Array[]): RivalMatrix {
  const points = spectra.length === 0 ? 0 : spectra[0].length;
  const rows = new Float64Array(spectra.length * points);
  spectra.forEach((spectrum, index) => {
    if (spectrum.length !== points) {
      throw new RangeError(`packRivals: row ${index} has ${spectrum.length} points, not ${points}`);
    }
    const unit = centredUnit(spectrum);
    if (unit !== null) rows.set(unit, index * points);
  });
  return { count: spectra.length, points, rows };
}

/** Correlation of a scan with every row, in row order. A constant scan gives zeros. */
export function rivalCorrelations(scan: Float64Array, matrix: RivalMatrix): Float64Array {
  const result = new Float64Array(matrix.count);
  if (matrix.count === 0) return result;
  const unit = centredUnit(scan);
  if (unit === null) return result;
  dotProducts(matrix.rows, matrix.points, unit, result, 0, matrix.count);
  for (let i = 0; i < result.length; i++) result[i] = withinUnit(result[i]);
  return result;
}

/**
 * The `count` library rows most like the scan, best first. Equal correlations keep row order, so the answer
 * never depends on a sort's mood.
 */
export function bestRivals(scan: Float64Array, matrix: RivalMatrix, count: number): RivalScore[] {
  const correlations = rivalCorrelations(scan, matrix);
  const best: RivalScore[] = [];
  const wanted = Math.min(Math.max(0, Math.floor(count)), matrix.count);
  if (wanted === 0) return best;
  for (let index = 0; index < correlations.length; index++) {
    const value = correlations[index];
    if (best.length === wanted && value <= best[wanted - 1].correlation) continue;
    let place = best.length;
    while (place > 0 && value > best[place - 1].correlation) place--;
    best.splice(place, 0, { index, correlation: value });
    if (best.length > wanted) best.pop();
  }
  return best;
}
