import { EigenvalueDecomposition, Matrix, SVD } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { classDistances, packClassModel, type PackedClassModel } from '$lib/spectra/model/distances';
import { leaveOneOut, leaveSourceOut } from '$lib/spectra/model/leaveOneOut';
import { stackDistances, stackModels } from '$lib/spectra/model/modelStack';
import { pca, type Pca } from '$lib/spectra/model/pca';
import { downdatedPairs } from '$lib/spectra/model/secularRoots';
import { symmetricEigen } from '$lib/spectra/model/symmetricEigen';
import { madeClass, seededNormal } from '../support/madeSpectra';

function packed(fit: Pca, components: number): PackedClassModel {
  return {
    points: fit.points,
    mean: fit.mean,
    loadings: fit.loadings.slice(0, components),
    eigenvalues: fit.eigenvalues
  };
}

/** Largest difference relative to the larger of the two values. */
function worst(found: ArrayLike<number>, expected: ArrayLike<number>): number {
  let most = 0;
  for (let i = 0; i < expected.length; i++) {
    most = Math.max(most, Math.abs(found[i] - expected[i]) / Math.max(Math.abs(expected[i]), 1e-300));
  }
  return most;
}

function randomSymmetric(size: number, seed: number): Float64Array {
  const normal = seededNormal(seed);
  const a = new Float64Array(size * size);
  for (let i = 0; i < size; i++) for (let j = 0; j <= i; j++) a[i * size + j] = a[j * size + i] = normal();
  return a;
}

describe('symmetric eigen-decomposition', () => {
  it.each([1, 2, 3, 5, 17, 40])('of size %i gives back the matrix, with orthonormal vectors', (size) => {
    const a = randomSymmetric(size, 100 + size);
    const { values, vectors } = symmetricEigen(a, size);
    for (let i = 0; i < size; i++) {
      for (let j = 0; j < size; j++) {
        let back = 0;
        let product = 0;
        for (let k = 0; k < size; k++) {
          back += values[k] * vectors[k * size + i] * vectors[k * size + j];
          product += vectors[i * size + k] * vectors[j * size + k];
        }
        expect(Math.abs(back - a[i * size + j])).toBeLessThan(1e-12 * size);
        expect(Math.abs(product - (i === j ? 1 : 0))).toBeLessThan(1e-12);
      }
    }
    expect(Array.from(values)).toEqual(Array.from(values).sort((x, y) => y - x));
  });

  it('agrees with an independent implementation', () => {
    const a = randomSymmetric(25, 9);
    const matrix = new Matrix(
      Array.from({ length: 25 }, (_, i) => Array.from(a.subarray(i * 25, i * 25 + 25)))
    );
    const other = new EigenvalueDecomposition(matrix, { assumeSymmetric: true }).realEigenvalues.sort(
      (x, y) => y - x
    );
    const own = symmetricEigen(a, 25).values;
    other.forEach((value, k) => expect(Math.abs(own[k] - value)).toBeLessThan(1e-12));
  });

  it.each([
    ['all zero', [0, 0, 0, 0, 0, 0, 0, 0, 0], [0, 0, 0]],
    ['diagonal already', [1, 0, 0, 0, 3, 0, 0, 0, 2], [3, 2, 1]],
    ['of rank one', [1, 2, 3, 2, 4, 6, 3, 6, 9], [14, 0, 0]],
    ['with a double eigenvalue', [2, 1, 1, 1, 2, 1, 1, 1, 2], [4, 1, 1]],
    ['with coupling in the last place only', [5, 0, 0, 0, 1, 2, 0, 2, 1], [5, 3, -1]]
  ])('of a matrix %s', (_, a, expected) => {
    const { values } = symmetricEigen(Float64Array.from(a), 3);
    expected.forEach((value, k) => expect(Math.abs(values[k] - value)).toBeLessThan(1e-13));
  });
});

describe('principal components', () => {
  const rows = madeClass({ count: 14, points: 90, factors: [6, 3, 1], noise: 0.2, seed: 21 });
  const fit = pca(rows, 5);

  it('agree with a singular value decomposition', () => {
    const centred = new Matrix(rows.map((row) => Array.from(row, (value, j) => value - fit.mean[j])));
    const svd = new SVD(centred.transpose(), { autoTranspose: true });
    const eigenvalues = svd.diagonal.slice(0, 13).map((s) => (s * s) / 13);
    expect(worst(fit.eigenvalues, eigenvalues)).toBeLessThan(1e-9);
    fit.loadings.forEach((loading, k) => {
      const other = svd.leftSingularVectors.getColumn(k);
      const along = Math.abs(loading.reduce((sum, value, j) => sum + value * other[j], 0));
      expect(along).toBeCloseTo(1, 10);
    });
  });

  it('have orthonormal loadings whose largest element is positive', () => {
    fit.loadings.forEach((a, i) => {
      const largest = a.reduce((most, value) => (Math.abs(value) > Math.abs(most) ? value : most), 0);
      expect(largest).toBeGreaterThan(0);
      fit.loadings.forEach((b, j) => {
        const product = a.reduce((sum, value, k) => sum + value * b[k], 0);
        expect(Math.abs(product - (i === j ? 1 : 0))).toBeLessThan(1e-14);
      });
    });
  });

  it('are the same bits when asked again, and stop at the rank', () => {
    expect(pca(rows, 5).loadings).toEqual(fit.loadings);
    expect(pca(rows, 50).loadings).toHaveLength(13);
    const twins = [rows[0], rows[1], rows[0], rows[1]];
    expect(pca(twins, 3).loadings).toHaveLength(1);
  });

  it('keep weak loadings orthogonal where eigenvalues differ by ten orders', () => {
    const steep = pca(madeClass({ count: 9, points: 50, factors: [1e5, 1, 1], noise: 1e-4, seed: 4 }), 3);
    expect(steep.eigenvalues[0] / steep.eigenvalues[2]).toBeGreaterThan(1e9);
    const product = steep.loadings[0].reduce((sum, value, j) => sum + value * steep.loadings[2][j], 0);
    expect(Math.abs(product)).toBeLessThan(1e-14);
  });

  it('are refused for one spectrum or unequal lengths', () => {
    expect(() => pca([rows[0]], 1)).toThrow(RangeError);
    expect(() => pca([rows[0], rows[1].subarray(2)], 1)).toThrow(RangeError);
  });
});

describe('the largest eigenpairs of a diagonal matrix less a rank-one matrix', () => {
  const check = (poles: number[], z: number[], rho: number, count: number) => {
    const size = poles.length;
    const full = new Float64Array(size * size);
    for (let i = 0; i < size; i++) {
      for (let j = 0; j < size; j++) full[i * size + j] = (i === j ? poles[i] : 0) - rho * z[i] * z[j];
    }
    const expected = symmetricEigen(full, size);
    const { values, vectors } = downdatedPairs(Float64Array.from(poles), Float64Array.from(z), rho, count);
    expect(values).toHaveLength(Math.min(count, size));
    for (let k = 0; k < values.length; k++) {
      expect(Math.abs(values[k] - expected.values[k])).toBeLessThan(1e-13 * poles[0]);
      // A v = mu v, which also holds where the pair is one of an equal two.
      for (let i = 0; i < size; i++) {
        let image = 0;
        for (let j = 0; j < size; j++) image += full[i * size + j] * vectors[k * size + j];
        expect(Math.abs(image - values[k] * vectors[k * size + i])).toBeLessThan(1e-12 * poles[0]);
      }
    }
  };

  it.each([
    ['apart', [9, 5, 2, 1], [1, 0.5, 0.2, 0.1], 1, 4],
    ['untouched by z in places', [9, 5, 2, 1], [0, 0.5, 0, 0.1], 1, 4],
    ['equal in pairs', [5, 5, 2, 2, 1], [0.3, 0.4, 0.1, 0.2, 0.3], 1.2, 5],
    ['all equal', [3, 3, 3], [0.5, 0.5, 0.5], 0.7, 3],
    ['nearly equal', [4, 4 - 1e-13, 1], [0.3, 0.3, 0.3], 1, 3],
    ['touched by almost nothing', [4, 3, 2], [1e-9, 0.5, 1e-12], 1, 3],
    ['not downdated at all', [4, 3, 2], [0.1, 0.2, 0.3], 0, 3],
    ['many orders apart', [1e8, 1, 1e-6], [10, 0.3, 1e-4], 1, 2],
    ['asked for fewer', [9, 5, 2, 1], [1, 0.5, 0.2, 0.1], 1.5, 2]
  ])('poles %s', (_, poles, z, rho, count) => check(poles, z, rho, count));

  it('random ones', () => {
    const normal = seededNormal(77);
    for (let trial = 0; trial < 40; trial++) {
      const size = 2 + (trial % 9);
      const poles = Array.from({ length: size }, () => Math.abs(normal()) * 10).sort((a, b) => b - a);
      check(
        poles,
        Array.from({ length: size }, () => normal() * 0.3),
        1 + Math.abs(normal()),
        size
      );
    }
  });
});

describe('leave-one-out distances', () => {
  const sets: [string, Float64Array[]][] = [
    ['an ordinary set', madeClass({ count: 20, points: 120, factors: [6, 3, 1], noise: 0.2, seed: 31 })],
    ['noise alone', madeClass({ count: 12, points: 80, factors: [], noise: 1, seed: 32 })],
    ['more spectra than points', madeClass({ count: 30, points: 8, factors: [3, 1], noise: 0.3, seed: 33 })],
    [
      'one far outlier',
      madeClass({ count: 15, points: 60, factors: [2, 1], noise: 0.1, seed: 34 }).map((row, i) =>
        i === 3 ? row.map((v, j) => v + 40 * Math.sin(j)) : row
      )
    ]
  ];

  it.each(sets)('of %s equal those of true refits to 1e-8', (_, rows) => {
    for (const components of [1, 2, 4]) {
      const quick = leaveOneOut(pca(rows, components), components);
      const true_ = rows.map((row, i) =>
        classDistances(
          packed(
            pca(
              rows.filter((_row, other) => other !== i),
              components
            ),
            components
          ),
          row
        )
      );
      expect(quick.components).toBe(components);
      expect(
        worst(
          quick.t2,
          true_.map((one) => one.t2)
        )
      ).toBeLessThan(1e-8);
      expect(
        worst(
          quick.q,
          true_.map((one) => one.q)
        )
      ).toBeLessThan(1e-8);
    }
  });

  it('with twins among the references still equal true refits', () => {
    const base = madeClass({ count: 10, points: 40, factors: [3, 1], noise: 0.3, seed: 35 });
    const rows = [...base, base[0], base[4]];
    const quick = leaveOneOut(pca(rows, 2), 2);
    const refit = classDistances(packed(pca(rows.slice(1), 2), 2), rows[0]);
    expect(Math.abs(quick.t2[0] / refit.t2 - 1)).toBeLessThan(1e-8);
    expect(Math.abs(quick.q[0] / refit.q - 1)).toBeLessThan(1e-8);
  });

  it('by source equal those of true refits without the whole source', () => {
    const rows = madeClass({ count: 18, points: 70, factors: [4, 2], noise: 0.2, seed: 36 });
    const sources = rows.map((_, i) => `lot ${i % 5}`);
    const quick = leaveSourceOut(pca(rows, 3), sources, 3);
    rows.forEach((row, i) => {
      const refit = classDistances(
        packed(
          pca(
            rows.filter((_r, j) => sources[j] !== sources[i]),
            3
          ),
          3
        ),
        row
      );
      expect(Math.abs(quick.t2[i] / refit.t2 - 1)).toBeLessThan(1e-8);
      expect(Math.abs(quick.q[i] / refit.q - 1)).toBeLessThan(1e-8);
    });
  });

  it('need two sources', () => {
    const rows = madeClass({ count: 5, points: 30, factors: [1], noise: 0.2, seed: 37 });
    expect(() => leaveSourceOut(pca(rows, 1), ['a', 'a', 'a', 'a', 'a'], 1)).toThrow(RangeError);
    expect(() => leaveSourceOut(pca(rows, 1), ['a', 'b'], 1)).toThrow(RangeError);
  });
});

describe('distances under one model and under a stack of models', () => {
  const models = [1, 2, 3].map((components, k) =>
    packed(
      pca(
        madeClass({ count: 10, points: 64, factors: [5, 2, 1], noise: 0.3, seed: 50 + k, kind: k }),
        components
      ),
      components
    )
  );
  const scan = madeClass({ count: 1, points: 64, factors: [5, 2, 1], noise: 0.3, seed: 90 })[0];

  it('agree', () => {
    const { t2, q } = stackDistances(stackModels(models), scan);
    models.forEach((model, m) => {
      const single = classDistances(model, scan);
      expect(Math.abs(t2[m] / single.t2 - 1)).toBeLessThan(1e-10);
      expect(Math.abs(q[m] / single.q - 1)).toBeLessThan(1e-9);
    });
  });

  it('a member of the span has Q of zero and the T2 of its scores', () => {
    const model = models[2];
    const made = model.mean.map((m, j) => m + 2 * model.loadings[0][j] - model.loadings[2][j]);
    const { t2, q } = classDistances(model, made);
    expect(t2).toBeCloseTo(4 / model.eigenvalues[0] + 1 / model.eigenvalues[2], 10);
    expect(q).toBeLessThan(1e-20);
  });

  it('hand back the residual, and leave the spectrum alone', () => {
    const before = Float64Array.from(scan);
    const residual = new Float64Array(64);
    const { q } = classDistances(models[1], scan, residual);
    expect(residual.reduce((sum, value) => sum + value * value, 0)).toBe(q);
    expect(scan).toEqual(before);
  });

  it('survive being stored as JSON, bit for bit', () => {
    const model = models[2];
    const stored = {
      mean: Array.from(model.mean),
      loadings: model.loadings.map((loading) => Array.from(loading)),
      eigenvalues: Array.from(model.eigenvalues).slice(0, 3),
      residualEigenvalues: [],
      n: 10,
      limits: { significance: 0.01, t2: 1, q: 1, t2Form: '', qForm: '' }
    };
    const back = packClassModel(JSON.parse(JSON.stringify(stored)));
    expect(classDistances(back, scan)).toEqual(classDistances(model, scan));
  });

  it('refuse a spectrum of another length', () => {
    expect(() => classDistances(models[0], scan.subarray(1))).toThrow(RangeError);
    expect(() => stackModels([models[0], { ...models[1], points: 63 }])).toThrow(RangeError);
    expect(stackDistances(stackModels([]), scan).t2).toHaveLength(0);
  });
});
