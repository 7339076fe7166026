import { describe, expect, it } from 'vitest';
import {
  boxLimit,
  classicalMoments,
  fullDistance,
  fullDistanceLimit,
  robustMoments,
  scaledChiSquaredLimit
} from '$lib/spectra/model/dataDriven';
import { classDistances } from '$lib/spectra/model/distances';
import { jacksonMudholkarLimit, outlierSignificance, t2Limit } from '$lib/spectra/model/limits';
import { pca, type Pca } from '$lib/spectra/model/pca';
import { chiSquaredQuantile } from '$lib/spectra/statistics/quantiles';
import people from '../../reference/people/people.json';

/** Published figures carry eight decimals or fewer; all are to agree to one part in 1e5. */
function expectPublished(value: number, published: number): void {
  expect(Math.abs(value - published)).toBeLessThan(1e-5 * Math.max(1, Math.abs(published)));
}

function autoscaled(rows: readonly (readonly number[])[]): Float64Array[] {
  const n = rows.length;
  const columns = rows[0].map((_, j) => rows.map((row) => row[j]));
  const means = columns.map((column) => column.reduce((a, b) => a + b, 0) / n);
  const sds = columns.map((column, j) =>
    Math.sqrt(column.reduce((sum, value) => sum + (value - means[j]) ** 2, 0) / (n - 1))
  );
  return rows.map((row) => Float64Array.from(row, (value, j) => (value - means[j]) / sds[j]));
}

function distancesOf(fit: Pca, rows: readonly Float64Array[], components: number) {
  const model = {
    points: fit.points,
    mean: fit.mean,
    loadings: fit.loadings.slice(0, components),
    eigenvalues: fit.eigenvalues
  };
  return rows.map((row) => classDistances(model, row));
}

describe('Example A: People, 32 x 12, autoscaled (see reference/people/SOURCE.md)', () => {
  const rows = autoscaled(people.rows);
  const fit = pca(rows, 12);

  it('eigenvalues', () => {
    people.eigenvalues.forEach((value, k) => expectPublished(fit.eigenvalues[k], value));
  });

  describe.each(people.dataDriven.map((entry) => entry.components))('%i components', (components) => {
    const at = components - 1;
    const distances = distancesOf(fit, rows, components);
    const residual = fit.eigenvalues.subarray(components);
    const outlier = outlierSignificance(0.01, rows.length);

    it('Jackson-Mudholkar limit of Q, at 5 % and for outliers', () => {
      expectPublished(jacksonMudholkarLimit(residual, 0.05).limit, people.jacksonMudholkar95[at]);
      expectPublished(jacksonMudholkarLimit(residual, outlier).limit, people.jacksonMudholkarOutlier01[at]);
    });

    it('T2 limit for the calibration set, at 5 % and for outliers', () => {
      expectPublished(t2Limit('F, calibration set', 32, components, 0.05), people.t2Calibration95[at]);
      expectPublished(t2Limit('F, calibration set', 32, components, outlier), people.t2Outlier01[at]);
    });

    it("Box's limit of Q with whole degrees of freedom", () => {
      const q = distances.map((one) => one.q);
      expectPublished(boxLimit(q, 0.05, true), people.boxWholeDegrees95[at]);
    });

    it('data-driven moments and limits of the full distance', () => {
      const expected = people.dataDriven[at];
      const score = classicalMoments(distances.map((one) => one.t2));
      const residualMoments = classicalMoments(distances.map((one) => one.q));
      expectPublished(score.mean, expected.h0);
      expectPublished(residualMoments.mean, expected.q0);
      expect([score.dof, residualMoments.dof]).toEqual([expected.nh, expected.nq]);
      expectPublished(fullDistanceLimit(score, residualMoments, 0.05), expected.limit95);
      expectPublished(fullDistanceLimit(score, residualMoments, outlier), expected.outlier01);
    });
  });
});

describe('Example B: Barolo, 59 objects, 6 components (published output, mdatools test suite, MIT)', () => {
  const score = { mean: 1, dof: 7 };
  const residual = { mean: 1, dof: 6 };

  it('limits of the full distance', () => {
    expectPublished(fullDistanceLimit(score, residual, 0.05), 22.3620325);
    expectPublished(fullDistanceLimit(score, residual, outlierSignificance(0.01, 59)), 39.435341679);
  });

  it.each([
    [1.7303175629765168, 1.1058266406862676, 18.747182784953225],
    [0.6366950400532273, 1.1669444446632817, 11.458531948352281]
  ])('full distance of an object at h/h0 %d and q/q0 %d', (h, q, f) => {
    expectPublished(fullDistance(h, q, score, residual), f);
  });
});

describe('Example C: NIST/SEMATECH e-Handbook 6.5.4.1 (covariance confirmed, data from memory)', () => {
  const rows = [
    [4.0, 2.0, 0.6],
    [4.2, 2.1, 0.59],
    [3.9, 2.0, 0.58],
    [4.3, 2.1, 0.62],
    [4.1, 2.2, 0.63]
  ].map((row) => Float64Array.from(row));
  const fit = pca(rows, 3);

  it('the components carry the published covariance', () => {
    const covariance = (a: number, b: number) =>
      fit.loadings.reduce((sum, loading, k) => sum + fit.eigenvalues[k] * loading[a] * loading[b], 0);
    expect([covariance(0, 0), covariance(0, 1), covariance(0, 2)].map((v) => +v.toFixed(8))).toEqual([
      0.025, 0.0075, 0.00175
    ]);
    expect([covariance(1, 1), covariance(1, 2), covariance(2, 2)].map((v) => +v.toFixed(8))).toEqual([
      0.007, 0.00135, 0.00043
    ]);
  });

  it('T2 of the five members, and their sum (n - 1) p', () => {
    const t2 = distancesOf(fit, rows, 3).map((one) => one.t2);
    [1.75769231, 2.68076923, 1.94358974, 2.42435897, 3.19358974].forEach((value, i) =>
      expectPublished(t2[i], value)
    );
    expectPublished(
      t2.reduce((a, b) => a + b, 0),
      12
    );
  });
});

describe('Example D: NIST/SEMATECH e-Handbook 6.5.5.2, 10 x 3, autoscaled (data from memory, rest computed)', () => {
  const rows = autoscaled([
    [7, 4, 3],
    [4, 1, 8],
    [6, 3, 5],
    [8, 6, 1],
    [8, 5, 7],
    [7, 2, 9],
    [5, 3, 3],
    [9, 5, 8],
    [7, 4, 5],
    [8, 2, 2]
  ]);
  const fit = pca(rows, 3);
  const distances = distancesOf(fit, rows, 2);

  it('eigenvalues to the four places printed', () => {
    [1.7688, 0.9271, 0.3041].forEach((value, k) =>
      expect(Math.abs(fit.eigenvalues[k] - value)).toBeLessThan(6e-5)
    );
  });

  it('T2 and Q with two components, to the four places printed', () => {
    const t2 = [0.5791, 4.0046, 0.2839, 3.2633, 1.5008, 2.2396, 1.874, 3.4521, 0.0422, 0.7604];
    const q = [0.0011, 0.1095, 0.0245, 0.1342, 0.1166, 0.1999, 0.2008, 0.0005, 0.0314, 1.9189];
    distances.forEach((one, i) => {
      expect(Math.abs(one.t2 - t2[i])).toBeLessThan(6e-5);
      expect(Math.abs(one.q - q[i])).toBeLessThan(6e-5);
    });
  });

  it('Jackson-Mudholkar limits and h0', () => {
    const residual = fit.eigenvalues.subarray(2);
    expectPublished(jacksonMudholkarLimit(residual, 0.05).limit, 1.13957802);
    expectPublished(jacksonMudholkarLimit(residual, 0.01).limit, 2.00306254);
    expectPublished(jacksonMudholkarLimit(residual, 0.05).h0, 1 / 3);
  });

  it('the three T2 limits that are all in print', () => {
    expectPublished(t2Limit('F, calibration set', 10, 2, 0.05), 10.03268274);
    expectPublished(t2Limit('F, new object', 10, 2, 0.05), 11.03595102);
    expectPublished(t2Limit('beta, member', 10, 2, 0.05), 4.65838597);
  });
});

describe('limits at the edges of their domain', () => {
  it('Jackson-Mudholkar keeps h0 above zero on a long flat tail with one large value', () => {
    // theta1 = 11, theta2 = 1.1, theta3 = 1.001 with these: 1 - 2 theta1 theta3/(3 theta2^2) is far below zero.
    const tail = [1, ...new Array<number>(1000).fill(0.01)];
    const { limit, h0 } = jacksonMudholkarLimit(tail, 0.01);
    expect(h0).toBe(0.001);
    expect(limit).toBeGreaterThan(11);
    expect(Number.isFinite(limit)).toBe(true);
  });

  it('nothing left out gives a limit of zero', () => {
    expect(jacksonMudholkarLimit([], 0.05).limit).toBe(0);
  });

  it('robust moments of exact chi-squared quantiles recover their degrees of freedom', () => {
    // Pomerantsev & Rodionova, J. Chemometrics 28:518 (2014): the constants are fitted for N from 1 to 100.
    for (const dof of [2, 5, 12, 40]) {
      const quantiles = Array.from(
        { length: 999 },
        (_, i) => (3 * chiSquaredQuantile((i + 0.5) / 999, dof)) / dof
      );
      const robust = robustMoments(quantiles);
      expect(Math.abs(robust.dof - dof)).toBeLessThanOrEqual(Math.max(1, 0.05 * dof));
      expect(Math.abs(robust.mean - 3)).toBeLessThan(0.2);
    }
  });

  it('one gross outlier moves the robust limit little and the classical one much', () => {
    const clean = Array.from({ length: 60 }, (_, i) => chiSquaredQuantile((i + 0.5) / 60, 4) / 4);
    const dirty = [...clean.slice(1), 60];
    const shift = (moments: typeof classicalMoments) =>
      scaledChiSquaredLimit(moments(dirty), 0.01) / scaledChiSquaredLimit(moments(clean), 0.01);
    expect(shift(robustMoments)).toBeLessThan(1.1);
    expect(shift(classicalMoments)).toBeGreaterThan(2);
  });

  it.each([0, 1, -0.1, Number.NaN])('a significance of %d is refused', (significance) => {
    expect(() => t2Limit('F, new object', 10, 2, significance)).toThrow(RangeError);
    expect(() => jacksonMudholkarLimit([1], significance)).toThrow(RangeError);
  });
});
