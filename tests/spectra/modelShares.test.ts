import fc from 'fast-check';
import { fcnnlsVector } from 'ml-fcnnls';
import { Matrix } from 'ml-matrix';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { nonNegativeShares } from '$lib/spectra/model/nonNegativeLeastSquares';
import '../support/fixedSeed';
import { lorentzians, seededNormal } from '../support/madeSpectra';
import { readTable, readTwoColumns, sharedPath } from '../support/sharedData';

const axis = { from: 400, to: 1800, step: 2 };
const one = (centreCm1: number) => lorentzians(axis, [{ centreCm1, height: 1, fwhmCm1: 12 }]).intensity;
const sugar = one(850);
const liner = one(1295);
const filler = one(1086);

function mix(parts: readonly (readonly [number, Float64Array])[], noise = 0, seed = 1): Float64Array {
  const normal = seededNormal(seed);
  return sugar.map((_, j) => parts.reduce((sum, [share, part]) => sum + share * part[j], noise * normal()));
}

describe('non-negative shares', () => {
  it('of an exact mixture are exact', () => {
    const { coefficients, shares, relativeResidual } = nonNegativeShares(
      mix([
        [0.6, sugar],
        [0.2, liner]
      ]),
      [sugar, liner, filler]
    );
    expect(coefficients[0]).toBeCloseTo(0.6, 12);
    expect(coefficients[1]).toBeCloseTo(0.2, 12);
    expect(shares[0]).toBeCloseTo(0.75, 12);
    expect(shares[2]).toBe(0);
    expect(relativeResidual).toBeLessThan(1e-12);
  });

  it('never go below zero, and what is held at zero does not pull on the others', () => {
    const spectrum = mix([
      [1, sugar],
      [-0.5, liner]
    ]);
    const { coefficients } = nonNegativeShares(spectrum, [sugar, liner]);
    const alone = nonNegativeShares(spectrum, [sugar]);
    expect(coefficients).toEqual([alone.coefficients[0], 0]);
  });

  it('of a spectrum that is the opposite of all components are all zero', () => {
    const result = nonNegativeShares(mix([[-1, sugar]]), [sugar, liner], 'none');
    expect(result).toEqual({
      coefficients: [0, 0],
      shares: [0, 0],
      standardErrors: [0, 0],
      relativeResidual: 1
    });
  });

  it('satisfy the conditions of a minimum: no gradient where positive, none inward where zero', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 4, maxLength: 4 }),
        (weights) => {
          const components = [sugar, liner, filler, one(870)];
          const spectrum = mix(
            weights.map((w, k) => [w, components[k]] as const),
            0.02,
            5
          );
          const { coefficients } = nonNegativeShares(spectrum, components, 'none');
          const residual = spectrum.map((y, j) =>
            components.reduce((left, x, k) => left - coefficients[k] * x[j], y)
          );
          components.forEach((x, k) => {
            const gradient = residual.reduce((sum, value, j) => sum + value * x[j], 0);
            if (coefficients[k] > 0) expect(Math.abs(gradient)).toBeLessThan(1e-9);
            else expect(gradient).toBeLessThan(1e-9);
          });
        }
      ),
      { numRuns: 60 }
    );
  });

  it('agree with an independent implementation', () => {
    const components = [sugar, liner, filler, one(870), one(860)];
    const columns = new Matrix(Array.from({ length: sugar.length }, (_, j) => components.map((x) => x[j])));
    for (let seed = 1; seed <= 8; seed++) {
      const normal = seededNormal(seed);
      const spectrum = mix(
        components.map((x) => [normal(), x] as const),
        0.05,
        seed
      );
      const other = fcnnlsVector(columns, Array.from(spectrum)).K.to1DArray();
      nonNegativeShares(spectrum, components, 'none').coefficients.forEach((value, k) =>
        expect(value).toBeCloseTo(other[k], 9)
      );
    }
  });

  it('of two components that cannot be told apart are given to one of them, not refused', () => {
    const { shares } = nonNegativeShares(mix([[1, sugar]]), [sugar, sugar.map((value) => 2 * value), liner]);
    expect(shares.reduce((a, b) => a + b, 0)).toBeCloseTo(1, 12);
    expect(shares.filter((share) => share > 0)).toHaveLength(1);
  });

  it('have standard errors that match their scatter in repeated noise', () => {
    const found: number[] = [];
    let stated = 0;
    for (let seed = 1; seed <= 300; seed++) {
      const spectrum = mix(
        [
          [0.8, sugar],
          [0.2, liner]
        ],
        0.05,
        seed
      );
      const { shares, standardErrors } = nonNegativeShares(spectrum, [sugar, liner]);
      found.push(shares[1]);
      stated += standardErrors[1] / 300;
    }
    const mean = found.reduce((a, b) => a + b, 0) / found.length;
    const sd = Math.sqrt(found.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (found.length - 1));
    expect(stated / sd).toBeGreaterThan(0.85);
    expect(stated / sd).toBeLessThan(1.25);
    expect(Math.abs(mean - 0.2)).toBeLessThan(4 * (sd / Math.sqrt(300)));
  });

  it('have larger errors when the residual is smooth rather than noise of the same size', () => {
    const clean = mix([
      [0.8, sugar],
      [0.2, liner]
    ]);
    const rough = nonNegativeShares(
      clean.map((v, j) => v + 0.02 * (j % 2 === 0 ? 1 : -1)),
      [sugar, liner]
    );
    const smooth = nonNegativeShares(
      clean.map((v, j) => v + 0.02 * Math.SQRT2 * Math.sin(j / 15)),
      [sugar, liner]
    );
    expect(smooth.standardErrors[1]).toBeGreaterThan(3 * rough.standardErrors[1]);
  });

  it('do not see a constant or a line under the spectrum once it is allowed for, and are wrong when it is not', () => {
    const clean = mix([
      [0.8, sugar],
      [0.2, liner]
    ]);
    const raised = clean.map((value) => value + 0.3);
    const tilted = raised.map((value, j) => value + 0.0005 * j);
    const linerShare = (spectrum: Float64Array, background: 'none' | 'constant' | 'line') =>
      nonNegativeShares(spectrum, [sugar, liner], background).shares[1];
    expect(linerShare(raised, 'constant')).toBeCloseTo(0.2, 10);
    expect(linerShare(tilted, 'line')).toBeCloseTo(0.2, 10);
    expect(Math.abs(linerShare(raised, 'none') - 0.2)).toBeGreaterThan(0.05);
    expect(Math.abs(linerShare(tilted, 'none') - 0.2)).toBeGreaterThan(0.1);
  });

  it.each([0, 9])('of %i components are refused', (count) => {
    expect(() =>
      nonNegativeShares(
        sugar,
        Array.from({ length: count }, () => sugar)
      )
    ).toThrow(RangeError);
  });

  it('of real sugars come out as mixed (SPECARB spectra and mixtures as carried by mdatools, MIT)', () => {
    const folder = sharedPath('spectra/carbohydrates');
    if (folder === null) return;
    const names = ['fructose', 'lactose', 'ribose'];
    const pure = names.map((name) => readTwoColumns(join(folder, `${name}.csv`)).intensity);
    const lines = readFileSync(join(folder, 'mixtures.csv'), 'utf8')
      .trim()
      .split('\n')
      .map((line) => line.split(','));
    const fractions = readTable(join(folder, 'mixtures_fractions.csv'));
    expect(fractions.length).toBeGreaterThan(10);
    for (const row of fractions) {
      const column = lines[0].indexOf(row.mixture);
      const spectrum = Float64Array.from(lines.slice(1), (line) => Number(line[column]));
      const { shares, standardErrors } = nonNegativeShares(spectrum, pure);
      names.forEach((name, k) => {
        expect(Math.abs(shares[k] - Number(row[name]))).toBeLessThan(Math.max(0.02, 4 * standardErrors[k]));
      });
    }
  });
});
