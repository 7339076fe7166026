import { Matrix, SVD } from 'ml-matrix';
import { bench, describe } from 'vitest';
import { classDistances, type PackedClassModel } from '$lib/spectra/model/distances';
import { fitClassModel } from '$lib/spectra/model/fitClassModel';
import { leaveOneOut } from '$lib/spectra/model/leaveOneOut';
import { stackDistances, stackModels } from '$lib/spectra/model/modelStack';
import { pca } from '$lib/spectra/model/pca';
import { madeClass } from '../support/madeSpectra';
import { alternate, report } from '../support/rounds';

const COMPONENTS = 5;
const rows = madeClass({ count: 200, points: 1801, factors: [8, 5, 3, 2, 1], noise: 0.1, seed: 1 });

/** The usual way: centre, singular value decomposition of the whole matrix. */
function fitBySvd(spectra: readonly Float64Array[]): SVD {
  const x = new Matrix(spectra.map((row) => Array.from(row)));
  x.subRowVector(x.mean('column'));
  return new SVD(x, { computeLeftSingularVectors: false, autoTranspose: true });
}

function modelBuilding(): void {
  const fit = pca(rows, COMPONENTS);
  const timings = alternate(
    [
      { name: 'one fit', run: () => void pca(rows, COMPONENTS) },
      { name: 'all 200 leave-one-out models', run: () => void leaveOneOut(fit, COMPONENTS) },
      {
        name: 'fit, leave-one-out, limits',
        run: () => void fitClassModel(rows, { components: COMPONENTS, significance: 0.01 })
      },
      { name: 'one fit by ml-matrix SVD', run: () => void fitBySvd(rows) }
    ],
    7
  );
  console.log(report(`model building, 200 x 1,801, ${COMPONENTS} components`, timings));
  const refits = 200 * timings[3].medianMs;
  const gain = (refits / timings[2].medianMs).toFixed(0);
  console.log(
    `  200 refits by SVD would take ${(refits / 1000).toFixed(1)} s (200 x the median): ${gain} times as long`
  );
  console.log(
    `  worst relative difference from true refits, 5 of them: ${worstDifference(fit).toExponential(1)}`
  );
}

function worstDifference(fit: ReturnType<typeof pca>): number {
  const quick = leaveOneOut(fit, COMPONENTS);
  let worst = 0;
  for (const left of [0, 50, 99, 150, 199]) {
    const refit = pca(
      rows.filter((_, i) => i !== left),
      COMPONENTS
    );
    const { t2, q } = classDistances(refit, rows[left]);
    worst = Math.max(worst, Math.abs(quick.t2[left] / t2 - 1), Math.abs(quick.q[left] / q - 1));
  }
  return worst;
}

function thousandModels(): void {
  const fit = pca(
    madeClass({ count: 20, points: 1501, factors: [8, 5, 3, 2, 1], noise: 0.1, seed: 2 }),
    COMPONENTS
  );
  const model: PackedClassModel = fit;
  const models = Array.from({ length: 1_000 }, (): PackedClassModel => ({
    points: model.points,
    mean: Float64Array.from(model.mean),
    loadings: model.loadings.map((loading) => Float64Array.from(loading)),
    eigenvalues: model.eigenvalues
  }));
  const stack = stackModels(models);
  const scan = madeClass({ count: 1, points: 1501, factors: [8, 5], noise: 0.1, seed: 3 })[0];
  const residual = new Float64Array(1501);
  const timings = alternate(
    [
      { name: 'one by one', run: () => models.forEach((one) => classDistances(one, scan, residual)) },
      { name: 'stacked', run: () => void stackDistances(stack, scan) }
    ],
    15
  );
  console.log(report(`T2 and Q under 1,000 models of 1,501 points, ${COMPONENTS} components`, timings));
  const megabytes = stack.rows.values.byteLength / 1e6;
  console.log(`  ${megabytes.toFixed(0)} MB read at ${(megabytes / timings[1].medianMs).toFixed(1)} GB/s`);
}

describe('class models', () => {
  modelBuilding();
  thousandModels();
  const small = rows.slice(0, 20);
  bench('fitClassModel, 20 x 1,801', () => void fitClassModel(small, { components: 3, significance: 0.01 }));
  bench('pca, 50 x 1,801', () => void pca(rows.slice(0, 50), COMPONENTS));
});
