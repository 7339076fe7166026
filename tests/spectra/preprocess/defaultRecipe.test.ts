import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { correlation } from '$lib/spectra/compare/correlation';
import { DEFAULT_RECIPE, displayPart, isDerivative } from '$lib/spectra/preprocess/recipe';
import { applySteps, stepSpec, type StepSpec } from '$lib/spectra/preprocess/steps';
import type { Spectrum } from '$lib/spectra/spectrum';
import { readTable, readTwoColumns, sharedPath } from '../../support/sharedData';

const sugars = sharedPath('spectra/carbohydrates');
const solvents = sharedPath('spectra/solvents');

// The sugars end at 1600 cm-1, some solvents begin above 300.
const onRange = (recipe: readonly StepSpec[]) =>
  recipe.map((spec) =>
    spec.name === 'resample' ? stepSpec('resample', { fromCm1: 400, toCm1: 1600 }) : spec
  );
const whole = onRange(DEFAULT_RECIPE);
const withoutDerivative = whole.filter((spec) => !isDerivative(spec));

describe.skipIf(sugars === null || solvents === null)('the default recipe on real spectra', () => {
  const folder = sugars ?? '';
  const pure = ['fructose', 'lactose', 'ribose'].map((name) => readTwoColumns(join(folder, `${name}.csv`)));
  const neat = readdirSync(solvents ?? '').map((name) => readTwoColumns(join(solvents ?? '', name)));

  it('different materials resemble each other less than without the derivative', () => {
    const closest = (recipe: readonly StepSpec[]) => {
      const treated = [...pure, ...neat].map((spectrum) => applySteps(spectrum, recipe).intensity);
      const pairs = treated.flatMap((a, i) => treated.slice(0, i).map((b) => correlation(a, b)));
      expect(pairs).toHaveLength((treated.length * (treated.length - 1)) / 2);
      return Math.max(...pairs);
    };
    expect(closest(whole)).toBeLessThan(0.4);
    expect(closest(withoutDerivative)).toBeGreaterThan(0.42);
  });

  it('a noisy repeat of a pure sugar resembles it more than without the derivative', () => {
    const fractions = readTable(join(folder, 'mixtures_fractions.csv'));
    const rows = readTable(join(folder, 'mixtures.csv'));
    const repeats = fractions.flatMap((row) => {
      const at = ['fructose', 'lactose', 'ribose'].findIndex((name) => Number(row[name]) === 1);
      if (at < 0) return [];
      const spectrum: Spectrum = {
        shiftCm1: Float64Array.from(rows, (r) => Number(r.raman_shift_cm1)),
        intensity: Float64Array.from(rows, (r) => Number(r[row.mixture]))
      };
      return [{ spectrum, at }];
    });
    expect(repeats.length).toBeGreaterThan(0);
    const worst = (recipe: readonly StepSpec[]) =>
      Math.min(
        ...repeats.map(({ spectrum, at }) =>
          correlation(applySteps(spectrum, recipe).intensity, applySteps(pure[at], recipe).intensity)
        )
      );
    expect(worst(whole)).toBeGreaterThan(0.994);
    expect(worst(withoutDerivative)).toBeLessThan(0.99);
  });

  it('the display part keeps the sugars positive and their strongest band where it was', () => {
    for (const spectrum of pure) {
      const { shiftCm1, intensity } = applySteps(spectrum, displayPart(whole));
      const gridded = applySteps(spectrum, [whole[1]]).intensity;
      const top = (values: Float64Array) => values.indexOf(Math.max(...values));
      expect(Math.abs(shiftCm1[top(intensity)] - shiftCm1[top(gridded)])).toBeLessThanOrEqual(1);
      expect(Math.min(...intensity)).toBeGreaterThan(-0.05 * Math.max(...intensity));
    }
  });
});
