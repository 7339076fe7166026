import { describe, expect, it } from 'vitest';
import { conformalP, nonconformity } from '$lib/spectra/model/conformal';
import { crossValidateComponents } from '$lib/spectra/model/crossValidateComponents';
import { fewDistancesLimit } from '$lib/spectra/model/dataDriven';
import { classDistances, packClassModel } from '$lib/spectra/model/distances';
import { fitClassModel } from '$lib/spectra/model/fitClassModel';
import { jacksonMudholkarLimit, t2Limit } from '$lib/spectra/model/limits';
import { madeClass, seededNormal } from '../support/madeSpectra';

const FACTORS = [6, 3, 1.5];
const make = (count: number, seed: number) =>
  madeClass({ count, points: 120, factors: FACTORS, noise: 0.15, seed });

/** Share of genuine new spectra outside a limit, over several fits. */
function falseRejects(references: number, components: number, significance: number, fits: number) {
  let t2 = 0;
  let q = 0;
  let seen = 0;
  for (let f = 0; f < fits; f++) {
    const { model } = fitClassModel(make(references, 1000 + f), { components, significance });
    const packed = packClassModel(model);
    for (const row of make(60, 5000 + f)) {
      const distances = classDistances(packed, row);
      if (distances.t2 > model.limits.t2) t2++;
      if (distances.q > model.limits.q) q++;
      seen++;
    }
  }
  return { t2: t2 / seen, q: q / seen };
}

describe('the form of a limit follows the size of the set', () => {
  it('a large set takes the F form for a new object and Jackson-Mudholkar', () => {
    const { model, cautions } = fitClassModel(make(60, 1), { components: 2, significance: 0.01 });
    expect(model.limits.t2Form).toBe('F, new object');
    expect(model.limits.qForm).toBe('Jackson-Mudholkar');
    expect(model.limits.t2).toBe(t2Limit('F, new object', 60, 2, 0.01));
    expect(model.limits.q).toBe(jacksonMudholkarLimit(model.residualEigenvalues, 0.01).limit);
    expect(cautions).toEqual([]);
  });

  it('a small set takes the data-driven form of its held-out distances', () => {
    const { model, heldOut } = fitClassModel(make(8, 2), { components: 2, significance: 0.01 });
    expect(model.limits.t2Form).toContain('data-driven');
    expect(model.limits.qForm).toContain('data-driven');
    expect(model.limits.q).toBe(fewDistancesLimit(heldOut.q, 8, 0.01));
  });

  it('replicates of few lots count as few, however many they are', () => {
    const rows = make(60, 3);
    const sources = rows.map((_, i) => `lot ${i % 6}`);
    const { model, cautions } = fitClassModel(rows, { components: 2, significance: 0.01, sources });
    expect(model.limits.qForm).toContain('data-driven');
    expect(cautions.join(' ')).toContain('60 spectra count as 6');
  });
});

describe('a limit at 5 % turns away about 5 % of genuine new material', () => {
  it('with 60 references', () => {
    const { t2, q } = falseRejects(60, 2, 0.05, 12);
    expect(t2).toBeGreaterThan(0.02);
    expect(t2).toBeLessThan(0.08);
    expect(q).toBeGreaterThan(0.02);
    expect(q).toBeLessThan(0.1);
  });

  it('with 12 references: not more than twice as many', () => {
    const { t2, q } = falseRejects(12, 2, 0.05, 60);
    expect(t2).toBeLessThan(0.1);
    expect(q).toBeLessThan(0.1);
    expect(q).toBeGreaterThan(0.01);
  });

  it('where Jackson-Mudholkar from the 12 themselves would turn away three times as many', () => {
    let rejected = 0;
    for (let f = 0; f < 60; f++) {
      const { model } = fitClassModel(make(12, 1000 + f), { components: 2, significance: 0.05 });
      const limit = jacksonMudholkarLimit(model.residualEigenvalues, 0.05).limit;
      const packed = packClassModel(model);
      rejected += make(60, 5000 + f).filter((row) => classDistances(packed, row).q > limit).length;
    }
    expect(rejected / 3600).toBeGreaterThan(0.15);
  });
});

describe('fitting a class model', () => {
  it('says what a method owner must know of a small or one-sided set', () => {
    const oneLot = fitClassModel(make(6, 4), {
      components: 9,
      significance: 0.01,
      sources: new Array<string>(6).fill('lot 1')
    });
    const text = oneLot.cautions.join(' ');
    expect(text).toContain('one source');
    expect(text).toContain('There are 6 references');
    expect(text).toMatch(/carry \d of the 9 components/);
    expect(oneLot.model.loadings.length).toBe(oneLot.heldOut.components);
  });

  it('gives held-out nonconformity in ascending order, one for each reference', () => {
    const { model, heldOut, heldOutNonconformity } = fitClassModel(make(10, 5), {
      components: 2,
      significance: 0.01
    });
    const expected = Array.from(heldOut.t2, (t2, i) => nonconformity(t2, heldOut.q[i], model.limits));
    expect(heldOutNonconformity).toEqual(expected.sort((a, b) => a - b));
  });

  it('is the same JSON, byte for byte, from the same references', () => {
    const fit = () => JSON.stringify(fitClassModel(make(15, 6), { components: 3, significance: 0.01 }));
    expect(fit()).toBe(fit());
  });

  it('rejects another material', () => {
    const { model } = fitClassModel(make(20, 7), { components: 2, significance: 0.01 });
    const band = (j: number) => 3 * Math.exp(-(((j - 60) / 5) ** 2));
    const other = make(5, 8).map((row) => row.map((value, j) => value + band(j)));
    const packed = packClassModel(model);
    for (const row of other) expect(classDistances(packed, row).q).toBeGreaterThan(model.limits.q);
  });

  it.each([
    ['three references', make(3, 9)],
    ['the same spectrum over and over', Array.from({ length: 6 }, () => make(1, 9)[0])],
    ['two spectra over and over', Array.from({ length: 6 }, (_, i) => make(2, 9)[i % 2])]
  ])('is refused for %s', (_, rows) => {
    expect(() => fitClassModel(rows, { components: 1, significance: 0.01 })).toThrow(RangeError);
  });
});

describe('the conformal p-value', () => {
  it('is (1 + number at least as strange) / (n + 1)', () => {
    const scores = [0.1, 0.2, 0.2, 0.5, 0.9];
    expect(conformalP(scores, 0.05)).toBe(1);
    expect(conformalP(scores, 0.2)).toBe(5 / 6);
    expect(conformalP(scores, 0.3)).toBe(3 / 6);
    expect(conformalP(scores, 0.9)).toBe(2 / 6);
    expect(conformalP(scores, 2)).toBe(1 / 6);
    expect(conformalP([], 2)).toBe(1);
  });

  it('is at most e with chance at most e for spectra of the same kind, whatever the distribution', () => {
    const normal = seededNormal(11);
    let small = 0;
    for (let trial = 0; trial < 4000; trial++) {
      const scores = Array.from({ length: 19 }, () => Math.exp(2 * normal())).sort((a, b) => a - b);
      if (conformalP(scores, Math.exp(2 * normal())) <= 0.1) small++;
    }
    // Exactly 10 % here, for 0.1 is a multiple of 1/20; 4,000 trials give a standard error of 0.5 %.
    expect(Math.abs(small / 4000 - 0.1)).toBeLessThan(0.02);
  });
});

describe('cross-validation of the number of components', () => {
  const withLots = (lots: number, each: number, seed: number) => {
    const rows = madeClass({ count: lots * each, points: 80, factors: [8, 4], noise: 0.3, seed });
    return { rows, sources: rows.map((_, i) => `lot ${Math.floor(i / each)}`) };
  };

  it('finds the two that were put in', () => {
    const { rows, sources } = withLots(10, 3, 12);
    const curve = crossValidateComponents(rows, sources, 6);
    expect(curve.suggested).toBe(2);
    expect(curve.folds).toBe(10);
    expect(curve.rmsecv).toHaveLength(7);
    // Noise 0.3; the second factor adds 4^2/80 to its square when left out.
    expect(curve.rmsecv[1]).toBeGreaterThan(1.6 * 0.3);
    expect(curve.rmsecv[2]).toBeLessThan(1.15 * 0.3);
    expect(curve.why).toContain('2 components');
  });

  it('does not fall for ever: beyond the true number the error does not drop by more than a few percent', () => {
    const { rows, sources } = withLots(10, 3, 13);
    const { rmsecv } = crossValidateComponents(rows, sources, 6);
    expect(Math.min(...rmsecv.slice(3))).toBeGreaterThan(0.97 * rmsecv[2]);
  });

  it('leaves out lots, not replicates: what only replicates share is not taken for structure', () => {
    // Each lot has a direction of its own; its three replicates repeat it exactly but for a little noise.
    const normal = seededNormal(14);
    const lots = madeClass({ count: 8, points: 80, factors: [], noise: 2, seed: 15 });
    const rows = lots.flatMap((lot) => [0, 1, 2].map(() => lot.map((value) => value + 0.02 * normal())));
    const sources = rows.map((_, i) => `lot ${Math.floor(i / 3)}`);
    const byLot = crossValidateComponents(rows, sources, 5);
    const byReplicate = crossValidateComponents(
      rows,
      rows.map((_, i) => `replicate ${i}`),
      5
    );
    expect(byLot.suggested).toBe(1);
    expect(byLot.rmsecv[5]).toBeGreaterThan(0.9 * byLot.rmsecv[0]);
    expect(byReplicate.suggested).toBe(5);
  });

  it('predicts each left-out value as a least-squares fit to the other points does', () => {
    const { rows } = withLots(4, 1, 16);
    const short = rows.map((row) => row.slice(0, 6));
    const curve = crossValidateComponents(short, ['a', 'b', 'c', 'd'], 1);
    let press = 0;
    short.forEach((row, i) => {
      const others = short.filter((_, k) => k !== i);
      const fit = fitOne(others);
      row.forEach((value, j) => (press += (value - predictFromOthers(fit, row, j)) ** 2));
    });
    expect(curve.press[1]).toBeCloseTo(press, 8);
  });

  it('deals many sources out to twenty folds', () => {
    const { rows, sources } = withLots(25, 1, 17);
    expect(crossValidateComponents(rows, sources, 3).folds).toBe(20);
  });

  it('needs two sources', () => {
    const { rows } = withLots(2, 3, 18);
    expect(() => crossValidateComponents(rows, new Array<string>(6).fill('a'), 2)).toThrow(RangeError);
  });
});

/** Mean and first loading, by power iteration: independent of the code under test. */
function fitOne(rows: readonly Float64Array[]) {
  const mean = rows[0].map((_, j) => rows.reduce((sum, row) => sum + row[j], 0) / rows.length);
  let loading = Float64Array.from(mean, (_, j) => 1 + j);
  for (let step = 0; step < 3000; step++) {
    const next = new Float64Array(mean.length);
    for (const row of rows) {
      const score = row.reduce((sum, value, j) => sum + (value - mean[j]) * loading[j], 0);
      row.forEach((value, j) => (next[j] += score * (value - mean[j])));
    }
    const length = Math.hypot(...next);
    loading = next.map((value) => value / length);
  }
  return { mean, loading };
}

function predictFromOthers(fit: ReturnType<typeof fitOne>, row: Float64Array, left: number): number {
  let above = 0;
  let below = 0;
  row.forEach((value, j) => {
    if (j === left) return;
    above += (value - fit.mean[j]) * fit.loading[j];
    below += fit.loading[j] ** 2;
  });
  return fit.mean[left] + (above / below) * fit.loading[left];
}
