import { describe, expect, it } from 'vitest';
import { fitPlsDiscriminant } from '$lib/spectra/model/fitPlsDiscriminant';
import { discriminantScore } from '$lib/spectra/model/plsDiscriminant';
import { validatePlsDiscriminant, type LabelledSpectrum } from '$lib/spectra/model/validatePlsDiscriminant';
import { madeClass } from '../support/madeSpectra';

/**
 * Textbook NIPALS for one response (Geladi & Kowalski, Anal. Chim. Acta 185:1, 1986), written out plainly: the
 * oracle for the regression coefficients.
 */
function textbookCoefficients(rows: readonly Float64Array[], labels: readonly number[], latent: number) {
  const n = rows.length;
  const points = rows[0].length;
  const mean = rows[0].map((_, j) => rows.reduce((sum, row) => sum + row[j], 0) / n);
  const meanY = labels.reduce((a, b) => a + b, 0) / n;
  const x = rows.map((row) => row.map((value, j) => value - mean[j]));
  let y = labels.map((label) => label - meanY);
  const weights: Float64Array[] = [];
  const loadings: Float64Array[] = [];
  const inner: number[] = [];
  for (let a = 0; a < latent; a++) {
    let w = new Float64Array(points);
    x.forEach((row, i) => row.forEach((value, j) => (w[j] += value * y[i])));
    const length = Math.hypot(...w);
    w = w.map((value) => value / length);
    const t = x.map((row) => row.reduce((sum, value, j) => sum + value * w[j], 0));
    const tt = t.reduce((sum, value) => sum + value * value, 0);
    const p = new Float64Array(points);
    x.forEach((row, i) => row.forEach((value, j) => (p[j] += (value * t[i]) / tt)));
    const c = t.reduce((sum, value, i) => sum + value * y[i], 0) / tt;
    x.forEach((row, i) => row.forEach((_, j) => (row[j] -= t[i] * p[j])));
    y = y.map((value, i) => value - c * t[i]);
    weights.push(w);
    loadings.push(p);
    inner.push(c);
  }
  // Rotated weights, R = W (P'W)^-1, one after the other.
  const coefficients = new Float64Array(points);
  const rotated: Float64Array[] = [];
  weights.forEach((w, a) => {
    const r = Float64Array.from(w);
    for (let b = 0; b < a; b++) {
      const along = loadings[b].reduce((sum, value, j) => sum + value * w[j], 0);
      for (let j = 0; j < points; j++) r[j] -= along * rotated[b][j];
    }
    rotated.push(r);
    for (let j = 0; j < points; j++) coefficients[j] += r[j] * inner[a];
  });
  return {
    coefficients,
    predict: (row: Float64Array) => row.reduce((s, v, j) => s + (v - mean[j]) * coefficients[j], meanY)
  };
}

const pair = (seed: number, gap: number) => {
  const rows = madeClass({ count: 24, points: 70, factors: [3, 1], noise: 0.3, seed });
  const shift = (row: Float64Array) => row.map((value, j) => value + gap * Math.exp(-(((j - 30) / 4) ** 2)));
  return { claimed: rows.slice(0, 12), other: rows.slice(12).map(shift) };
};

function labelled(seed: number, gap: number): LabelledSpectrum[] {
  const { claimed, other } = pair(seed, gap);
  const lot = (i: number) => `lot ${Math.floor(i / 2)}`;
  return [
    ...claimed.map((spectrum, i) => ({ spectrum, source: lot(i), claimed: true })),
    ...other.map((spectrum, i) => ({ spectrum, source: lot(i), claimed: false }))
  ];
}

describe('the discriminant for a confusable pair', () => {
  it.each([1, 2, 3, 5])('with %i latent variables has the textbook coefficients', (latent) => {
    const { claimed, other } = pair(3, 1);
    const rows = [...claimed, ...other.slice(0, 7)];
    const labels = rows.map((_, i) => (i < 12 ? 1 : -1));
    const model = fitPlsDiscriminant(claimed, other.slice(0, 7), latent);
    const oracle = textbookCoefficients(rows, labels, latent);
    const largest = Math.max(...oracle.coefficients.map(Math.abs));
    model.coefficients.forEach((value, j) =>
      expect(Math.abs(value - oracle.coefficients[j])).toBeLessThan(1e-9 * largest)
    );
    for (const row of other) {
      expect(discriminantScore(model, row) + model.threshold).toBeCloseTo(oracle.predict(row), 9);
    }
  });

  it('puts the threshold midway between the two means, however unequal the numbers', () => {
    const { claimed, other } = pair(4, 2);
    const model = fitPlsDiscriminant(claimed, other.slice(0, 3), 2);
    const mean = (rows: Float64Array[]) =>
      rows.reduce((sum, row) => sum + discriminantScore(model, row), 0) / rows.length;
    expect(mean(claimed)).toBeCloseTo(-mean(other.slice(0, 3)), 9);
    expect(mean(claimed)).toBeGreaterThan(0);
  });

  it('tells left-out lots of a truly different pair apart, far better than chance', () => {
    const result = validatePlsDiscriminant(labelled(5, 2), { maxComponents: 4, permutations: 99, seed: 1 });
    expect(Math.min(...result.errors)).toBe(0);
    expect(result.permutationP).toBeLessThanOrEqual(0.05);
    expect(result.sources).toBe(12);
  });

  it('is shown up by the check against chance when the two are the same material', () => {
    const result = validatePlsDiscriminant(labelled(6, 0), { maxComponents: 4, permutations: 99, seed: 1 });
    expect(Math.min(...result.errors)).toBeGreaterThan(4);
    expect(result.permutationP).toBeGreaterThan(0.05);
  });

  it('fits any labels perfectly on its own spectra, which is why left-out lots decide', () => {
    const { claimed, other } = pair(6, 0);
    const model = fitPlsDiscriminant(claimed, other, 8);
    expect(claimed.every((row) => discriminantScore(model, row) > 0)).toBe(true);
    expect(other.every((row) => discriminantScore(model, row) < 0)).toBe(true);
  });

  it('gives the same answer for the same seed', () => {
    const run = (seed: number) =>
      validatePlsDiscriminant(labelled(7, 0.3), { maxComponents: 2, permutations: 40, seed });
    expect(run(9)).toEqual(run(9));
  });

  it('is refused with a single spectrum or a single source on one side', () => {
    const { claimed, other } = pair(8, 1);
    expect(() => fitPlsDiscriminant(claimed, other.slice(0, 1), 1)).toThrow(RangeError);
    expect(() => fitPlsDiscriminant(claimed, other, 0)).toThrow(RangeError);
    const oneLot = labelled(8, 1).filter((one) => one.claimed || one.source === 'lot 0');
    expect(() => validatePlsDiscriminant(oneLot, { maxComponents: 1, permutations: 9, seed: 1 })).toThrow(
      RangeError
    );
  });
});
