import { inverse, Matrix } from 'ml-matrix';
import { PLS } from 'ml-pls';
import { rawScore, type PlsDiscriminant } from './plsDiscriminant';

/** The parts of the package that are used, as they are at run time (its own types want a second argument). */
interface FittedPls {
  train(x: Matrix, y: Matrix): void;
  readonly W: Matrix;
  readonly P: Matrix;
  readonly B: Matrix;
  readonly Q: Matrix;
}
type PlsConstructor = new (options: {
  latentVectors: number;
  tolerance: number;
  scale: boolean;
}) => FittedPls;
const NipalsPls = PLS as unknown as PlsConstructor;

/**
 * Fits a partial least-squares discriminant, claimed material +1, the other -1 (Barker & Rayens, J. Chemometrics
 * 17:166, 2003).
 *
 * Centring is done here, and so are the regression coefficients, W (P'W)^-1 B Q': the package's own `predict`
 * multiplies P B Q', which is not the PLS prediction.
 *
 * @param claimed spectra of the claimed material after the recipe
 * @param other spectra of the material it must be told from
 * @param components latent variables, at least 1, less than the number of spectra
 */
export function fitPlsDiscriminant(
  claimed: readonly Float64Array[],
  other: readonly Float64Array[],
  components: number
): PlsDiscriminant {
  if (claimed.length < 2 || other.length < 2)
    throw new RangeError('A discriminant needs two spectra of each material.');
  const rows = [...claimed, ...other];
  const labels = rows.map((_, i) => (i < claimed.length ? 1 : -1));
  const { coefficients, offset, used } = regress(rows, labels, components);
  const score = (row: Float64Array) => rawScore(coefficients, offset, row);
  const threshold = (meanOf(claimed.map(score)) + meanOf(other.map(score))) / 2;
  return { coefficients: Array.from(coefficients), offset, threshold, components: used };
}

function regress(
  rows: readonly Float64Array[],
  labels: readonly number[],
  components: number
): { coefficients: Float64Array; offset: number; used: number } {
  const n = rows.length;
  const points = rows[0].length;
  const latent = Math.floor(components);
  if (latent < 1 || latent >= n)
    throw new RangeError(`${components} latent variables do not fit ${n} spectra.`);
  const x = new Matrix(rows.map((row) => Array.from(row)));
  const meanX = x.mean('column');
  const meanY = meanOf(labels);
  x.subRowVector(meanX);
  const y = Matrix.columnVector(labels.map((label) => label - meanY));
  const pls = new NipalsPls({ latentVectors: Math.min(latent, points), tolerance: 1e-10, scale: false });
  pls.train(x.clone(), y.clone());
  const { W, P, B, Q } = pls;
  const beta = W.mmul(inverse(P.transpose().mmul(W)))
    .mmul(B)
    .mmul(Q.transpose());
  const coefficients = Float64Array.from(beta.getColumn(0));
  let offset = meanY;
  for (let j = 0; j < points; j++) offset -= coefficients[j] * meanX[j];
  return { coefficients, offset, used: W.columns };
}

function meanOf(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}
