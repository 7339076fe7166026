import { centredUnit, withinUnit } from './correlation';
import { interleavedDots, interleaveRows, type InterleavedRows } from './interleavedRows';

/**
 * A library ready for comparison: every row centred and of unit length, so that r is a dot product. A constant
 * spectrum is a row of zeros: it correlates with nothing.
 */
export type RivalMatrix = InterleavedRows;

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
  const units = spectra.map((spectrum) => centredUnit(spectrum) ?? new Float64Array(spectrum.length));
  return interleaveRows(units, points);
}

/** Correlation of a scan with every row, in row order. A constant scan gives zeros. */
export function rivalCorrelations(scan: Float64Array, matrix: RivalMatrix): Float64Array {
  if (matrix.count === 0) return new Float64Array(0);
  const unit = centredUnit(scan);
  if (unit === null) return new Float64Array(matrix.count);
  const result = interleavedDots(matrix, unit);
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
