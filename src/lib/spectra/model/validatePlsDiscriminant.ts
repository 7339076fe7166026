import { seededRandom, shuffled } from '../statistics/seededRandom';
import { fitPlsDiscriminant } from './fitPlsDiscriminant';
import { foldsBySource } from './leaveOneOut';
import { pca } from './pca';
import { discriminantScore } from './plsDiscriminant';

export interface LabelledSpectrum {
  readonly spectrum: Float64Array;
  /** Lot or instrument: the unit that is left out, and whose label is permuted. */
  readonly source: string;
  readonly claimed: boolean;
}

export interface DiscriminantValidation {
  /** Left-out spectra on the wrong side of the threshold, for 1, 2 … latent variables. */
  readonly errors: readonly number[];
  readonly spectra: number;
  readonly sources: number;
  /** Fewest latent variables with the fewest errors. */
  readonly suggested: number;
  /** Chance of as few errors with labels dealt at random to the sources: (1 + #)/(permutations + 1). */
  readonly permutationP: number;
  readonly permutations: number;
}

/**
 * Cross-validates a discriminant with whole sources left out and checks it against chance: with some thousand
 * points and some dozen spectra any labels can be told apart on the spectra they were fitted to.
 *
 * All refits run in the coordinates of the full set's principal components: PLS does not change under rotation
 * of its variables, so this is exact, and as much faster as there are fewer spectra than points.
 *
 * @param seed of the permutations; the same seed gives the same answer
 * @throws RangeError unless each material comes from at least two sources
 */
export function validatePlsDiscriminant(
  spectra: readonly LabelledSpectrum[],
  options: { readonly maxComponents: number; readonly permutations: number; readonly seed: number }
): DiscriminantValidation {
  const folds = foldsBySource(
    spectra.map((one) => `${one.claimed ? '+' : '-'}${one.source}`),
    spectra.length
  );
  const foldLabels = folds.map((fold) => spectra[fold[0]].claimed);
  for (const side of [true, false]) {
    if (foldLabels.filter((label) => label === side).length < 2) {
      throw new RangeError('Each of the two materials must come from at least two sources.');
    }
  }
  const rows = scoreCoordinates(spectra.map((one) => one.spectrum));
  const most = Math.max(1, Math.min(Math.floor(options.maxComponents), smallestTraining(folds) - 1));
  const errors = Array.from({ length: most }, (_, a) => errorsLeftOut(rows, folds, foldLabels, a + 1));
  const suggested = errors.indexOf(Math.min(...errors)) + 1;
  const random = seededRandom(options.seed);
  let asGood = 0;
  for (let k = 0; k < options.permutations; k++) {
    const labels = shuffled(foldLabels, random);
    if (errorsLeftOut(rows, folds, labels, suggested) <= errors[suggested - 1]) asGood++;
  }
  return {
    errors,
    spectra: spectra.length,
    sources: folds.length,
    suggested,
    permutationP: (1 + asGood) / (options.permutations + 1),
    permutations: options.permutations
  };
}

/** The spectra as their scores on all principal components, scaled by the largest: an exact, short form. */
function scoreCoordinates(spectra: readonly Float64Array[]): Float64Array[] {
  const { eigen, eigenvalues, n } = pca(spectra, 0);
  const largest = Math.sqrt(eigen.values[0]);
  return spectra.map((_, i) =>
    Float64Array.from(
      eigenvalues,
      (_value, k) => (Math.sqrt(eigen.values[k]) * eigen.vectors[k * n + i]) / largest
    )
  );
}

function smallestTraining(folds: readonly number[][]): number {
  const total = folds.reduce((sum, fold) => sum + fold.length, 0);
  return total - Math.max(...folds.map((fold) => fold.length));
}

function errorsLeftOut(
  rows: readonly Float64Array[],
  folds: readonly number[][],
  labels: readonly boolean[],
  components: number
): number {
  let errors = 0;
  folds.forEach((fold, f) => {
    const sideRows = (side: boolean) =>
      folds.flatMap((other, o) => (o !== f && labels[o] === side ? other.map((i) => rows[i]) : []));
    const claimed = sideRows(true);
    const other = sideRows(false);
    if (claimed.length < 2 || other.length < 2) {
      errors += fold.length;
      return;
    }
    const model = fitPlsDiscriminant(claimed, other, components);
    for (const i of fold) if (discriminantScore(model, rows[i]) > 0 !== labels[f]) errors++;
  });
  return errors;
}
