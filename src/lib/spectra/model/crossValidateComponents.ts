import { foldsBySource } from './leaveOneOut';
import { pca } from './pca';

export interface ComponentCurve {
  /** Root mean square error of cross-validation for 0, 1, 2 … components. */
  readonly rmsecv: readonly number[];
  /** Its square summed over all rows and points: the predicted residual sum of squares. */
  readonly press: readonly number[];
  readonly folds: number;
  readonly suggested: number;
  /** One sentence for the method owner. */
  readonly why: string;
}

/** More sources than this are dealt out in turn to this many folds. */
const MOST_FOLDS = 20;
/** Fewer folds than this give no standard error worth the name. */
const FEWEST_FOR_ERROR = 4;
/** Then: within this factor of the smallest error. */
const CLOSE_ENOUGH = 1.05;

/**
 * How many principal components a material's references carry, judged by spectra of sources the model has not
 * seen: whole lots are left out, never single replicates.
 *
 * Each left-out value is predicted from the other points of its spectrum: with scores fitted to all other
 * points by least squares the error is exactly e_j / (1 - h_j), e_j the ordinary residual and
 * h_j = sum p_jk^2 (Bro, Kjeldahl, Smilde & Kiers, Anal. Bioanal. Chem. 390:1241, 2008). So the curve need not
 * fall for ever as plain residuals do.
 *
 * Suggested is the fewest components whose error is within one standard error, fold by fold, of the best.
 *
 * @param sources lot or instrument of each row; at least two different ones
 */
export function crossValidateComponents(
  rows: readonly Float64Array[],
  sources: readonly string[],
  maxComponents: number
): ComponentCurve {
  const bySource = foldsBySource(sources, rows.length);
  if (bySource.length < 2)
    throw new RangeError('Cross-validation needs references from at least two sources.');
  const folds = dealOut(bySource);
  const largest = Math.max(...folds.map((fold) => fold.length));
  const most = Math.max(1, Math.min(Math.floor(maxComponents), rows.length - largest - 2));
  const perFold = folds.map((fold) => foldErrors(rows, new Set(fold), most));
  const points = rows[0].length;
  const press = Array.from({ length: most + 1 }, (_, a) =>
    perFold.reduce((sum, errors) => sum + errors[a], 0)
  );
  const rmsecv = press.map((value) => Math.sqrt(value / (rows.length * points)));
  const means = perFold.map((errors, f) => errors.map((value) => value / (folds[f].length * points)));
  return { press, rmsecv, folds: folds.length, ...suggest(means, rmsecv) };
}

function dealOut(bySource: readonly number[][]): number[][] {
  if (bySource.length <= MOST_FOLDS) return bySource.map((fold) => [...fold]);
  const folds: number[][] = Array.from({ length: MOST_FOLDS }, () => []);
  bySource.forEach((rows, k) => folds[k % MOST_FOLDS].push(...rows));
  return folds;
}

/** Sum of squared prediction errors of the left-out rows for 0 … most components. */
function foldErrors(rows: readonly Float64Array[], out: ReadonlySet<number>, most: number): number[] {
  const fit = pca(
    rows.filter((_, i) => !out.has(i)),
    most
  );
  const points = fit.points;
  const errors = new Array<number>(most + 1).fill(0);
  for (const i of out) {
    const residual = Float64Array.from(rows[i], (value, j) => value - fit.mean[j]);
    const leverage = new Float64Array(points);
    for (let a = 0; a <= most; a++) {
      if (a > 0 && a <= fit.loadings.length) removeComponent(residual, leverage, fit.loadings[a - 1]);
      for (let j = 0; j < points; j++) {
        const rest = 1 - leverage[j];
        // A point that is a component by itself cannot be predicted from the others: predict the mean.
        const error = rest > 1e-12 ? residual[j] / rest : rows[i][j] - fit.mean[j];
        errors[a] += error * error;
      }
    }
  }
  return errors;
}

function removeComponent(residual: Float64Array, leverage: Float64Array, loading: Float64Array): void {
  let score = 0;
  for (let j = 0; j < residual.length; j++) score += residual[j] * loading[j];
  for (let j = 0; j < residual.length; j++) {
    residual[j] -= score * loading[j];
    leverage[j] += loading[j] * loading[j];
  }
}

function suggest(means: readonly number[][], rmsecv: readonly number[]): { suggested: number; why: string } {
  const best = rmsecv.reduce((at, value, a) => (a > 0 && value < rmsecv[at] ? a : at), 1);
  let suggested = 1;
  while (suggested < best && !asGood(means, rmsecv, suggested, best)) suggested++;
  const gain = (100 * (1 - rmsecv[suggested] / rmsecv[0])).toFixed(0);
  const plural = suggested === 1 ? 'component predicts' : 'components predict';
  const why =
    suggested === best
      ? `${suggested} ${plural} left-out sources best (error ${gain} % below that of the mean alone); more do not help.`
      : `${suggested} ${plural} left-out sources as well as ${best}, within the spread between folds (error ${gain} % below that of the mean alone).`;
  return rmsecv[best] < rmsecv[0]
    ? { suggested, why }
    : {
        suggested: 1,
        why: 'No component predicts left-out sources better than the mean alone: keep 1, and look whether the sources differ at all or too much.'
      };
}

function asGood(means: readonly number[][], rmsecv: readonly number[], few: number, best: number): boolean {
  if (means.length < FEWEST_FOR_ERROR) return rmsecv[few] <= CLOSE_ENOUGH * rmsecv[best];
  const excess = means.map((errors) => errors[few] - errors[best]);
  const mean = excess.reduce((a, b) => a + b, 0) / excess.length;
  const variance = excess.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (excess.length - 1);
  return mean <= Math.sqrt(variance / excess.length);
}
