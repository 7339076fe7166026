import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { savitzkyGolay } from '$lib/spectra/preprocess/savitzkyGolay';
import { filterWeights } from '$lib/spectra/preprocess/savitzkyGolayWeights';
import { relativeDistance, rippledCurve } from '../support/preprocessCurve';
import { sharedPath } from '../support/sharedData';

interface Row {
  readonly points: number;
  readonly poly_degree: number;
  readonly derivative: number;
  readonly numerators: readonly number[];
  readonly divisor: number;
}

const row = (
  points: number,
  poly_degree: number,
  derivative: number,
  numerators: number[],
  divisor: number
) => ({
  points,
  poly_degree,
  derivative,
  numerators,
  divisor
});

// Savitzky & Golay, Anal. Chem. 36:1627 (1964), as corrected by Steinier, Termonia & Deltour 44:1906 (1972);
// recomputed by exact rational least squares. Derivatives per point, factorial included.
const PUBLISHED: readonly Row[] = [
  row(5, 2, 0, [-3, 12, 17, 12, -3], 35),
  row(7, 2, 0, [-2, 3, 6, 7, 6, 3, -2], 21),
  row(9, 2, 0, [-21, 14, 39, 54, 59, 54, 39, 14, -21], 231),
  row(7, 4, 0, [5, -30, 75, 131, 75, -30, 5], 231),
  row(9, 4, 0, [15, -55, 30, 135, 179, 135, 30, -55, 15], 429),
  row(5, 2, 1, [-2, -1, 0, 1, 2], 10),
  row(7, 2, 1, [-3, -2, -1, 0, 1, 2, 3], 28),
  row(9, 2, 1, [-4, -3, -2, -1, 0, 1, 2, 3, 4], 60),
  row(5, 4, 1, [1, -8, 0, 8, -1], 12),
  row(7, 4, 1, [22, -67, -58, 0, 58, 67, -22], 252),
  row(5, 2, 2, [2, -1, -2, -1, 2], 7),
  row(7, 2, 2, [5, 0, -3, -4, -3, 0, 5], 42),
  row(9, 2, 2, [28, 7, -8, -17, -20, -17, -8, 7, 28], 462),
  row(5, 4, 2, [-1, 16, -30, 16, -1], 12),
  row(7, 4, 2, [-13, 67, -19, -70, -19, 67, -13], 132),
  // 25 points: one table in circulation prints 343 for the 342 here; 342 is exact.
  row(
    25,
    2,
    0,
    [
      -253, -138, -33, 62, 147, 222, 287, 342, 387, 422, 447, 462, 467, 462, 447, 422, 387, 342, 287, 222,
      147, 62, -33, -138, -253
    ],
    5175
  )
];

const distance = (r: Row) => {
  const weights = filterWeights(r.points, r.poly_degree, r.derivative).rows[(r.points - 1) / 2];
  return relativeDistance(
    weights,
    r.numerators.map((numerator) => numerator / r.divisor)
  );
};

describe('Savitzky-Golay weights against the published tables', () => {
  it.each(PUBLISHED)('$points points, degree $poly_degree, derivative $derivative', (published) => {
    expect(distance(published)).toBeLessThan(1e-13);
  });

  it('a wrong weight would be noticed', () => {
    const wrong = row(5, 2, 0, [-3, 12, 17, 12, -2], 35);
    expect(distance(wrong)).toBeGreaterThan(1e-3);
  });

  const file = sharedPath('standards/sg_coefficients.json');
  it.skipIf(file === null)(
    'every row of the long table, 5 to 25 points, degrees 2 and 4, derivatives 0 to 2',
    () => {
      const { rows } = JSON.parse(readFileSync(file ?? '', 'utf8')) as { rows: Row[] };
      expect(rows.length).toBeGreaterThanOrEqual(60);
      for (const published of rows) expect(distance(published)).toBeLessThan(1e-12);
    }
  );
});

// scipy 1.17.1 savgol_filter(mode='interp'), printed by tests/spectra/preprocess/frozenFigures.py.
describe('Savitzky-Golay filter against another implementation, ends included', () => {
  const AT = [0, 1, 29, 30, 60, 75, 90, 118, 119];
  it.each([
    {
      options: { window: 9, order: 3, derivative: 0 },
      stepCm1: 1,
      expected: [
        57.28962177963029, 58.36436594985381, 129.1541946252009, 133.05332642856382, 59.109525244758586,
        114.8104912302557, 68.5430372091368, 81.79162645622021, 81.93868711800783
      ]
    },
    {
      options: { window: 11, order: 2, derivative: 1 },
      stepCm1: 0.5,
      expected: [
        0.23564695171791628, 0.15861596594020794, 5.974316703240584, -0.05464779613335935, 2.215821027763509,
        0.4241375983329929, -0.71320133337416, 1.6454250432191397, 1.673183182444713
      ]
    },
    {
      options: { window: 15, order: 4, derivative: 2 },
      stepCm1: 2,
      expected: [
        -0.10840488233551854, -0.08200104885016532, -1.5407579796085968, -1.8016082815853112,
        0.018324616088073897, -0.823114480212876, 0.0904975014848528, -0.18588197149973232,
        -0.2756899404928467
      ]
    }
  ])('derivative $options.derivative at a step of $stepCm1 cm-1', ({ options, stepCm1, expected }) => {
    const filtered = savitzkyGolay.apply(rippledCurve(stepCm1), options, {}).intensity;
    expect(
      relativeDistance(
        AT.map((i) => filtered[i]),
        expected
      )
    ).toBeLessThan(1e-11);
  });
});
