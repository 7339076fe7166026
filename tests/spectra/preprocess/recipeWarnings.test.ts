import { describe, expect, it } from 'vitest';
import { DEFAULT_RECIPE } from '$lib/spectra/preprocess/recipe';
import { recipeWarnings } from '$lib/spectra/preprocess/recipeWarnings';
import { parseRecipe, stepSpec } from '$lib/spectra/preprocess/steps';

const grid = stepSpec('resample');
const baseline = stepSpec('asymmetric-least-squares');
const derivative = stepSpec('savitzky-golay');
const smoothing = stepSpec('savitzky-golay', { derivative: 0 });
const snv = stepSpec('snv');
const ranges = (name: 'keep-ranges' | 'drop-ranges', ...pairs: [number, number][]) =>
  stepSpec(name, { ranges: pairs.map(([fromCm1, toCm1]) => ({ fromCm1, toCm1 })) });

describe('warnings about a recipe', () => {
  it.each([
    ['the default', DEFAULT_RECIPE],
    [
      'ranges, smoothing and MSC',
      [grid, ranges('keep-ranges', [400, 900]), baseline, smoothing, stepSpec('msc')]
    ],
    ['a derivative without baseline', [stepSpec('despike'), grid, derivative, snv]]
  ])('none for a sound recipe: %s', (_, recipe) => {
    expect(recipeWarnings(recipe)).toEqual([]);
  });

  it.each([
    ['spikes after the grid', [grid, stepSpec('despike'), baseline, snv], 'remove them first'],
    ['a filter before the grid', [smoothing, grid, baseline, snv], 'before the grid step'],
    [
      'ranges before the grid',
      [ranges('drop-ranges', [500, 600]), grid, baseline, snv],
      'choose them after it'
    ],
    ['a baseline after a derivative', [grid, derivative, baseline, snv], 'Put the baseline first'],
    ['scaling before the baseline', [grid, snv, baseline], 'Put scaling last'],
    ['scaling before the derivative', [grid, baseline, snv, derivative], 'put scaling last'],
    ['no scaling', [grid, baseline], 'Nothing scales'],
    ['two baselines', [grid, baseline, stepSpec('arpls'), snv], 'More than one baseline'],
    ['neither baseline nor derivative', [grid, smoothing, snv], 'fluorescence'],
    ['two derivatives', [grid, derivative, derivative, snv], 'More than one derivative'],
    ['a grid from 200 cm-1', [stepSpec('resample', { fromCm1: 200 }), baseline, snv], 'below 300 cm-1'],
    [
      'a piece shorter than the window',
      [grid, ranges('keep-ranges', [400, 410], [500, 700]), derivative, snv],
      'refuses every spectrum'
    ],
    [
      'ranges off the grid',
      [grid, ranges('keep-ranges', [2000, 2100]), baseline, snv],
      'refuses every spectrum'
    ]
  ])('one for %s', (_, recipe, words) => {
    expect(parseRecipe(recipe).ok).toBe(true);
    expect(recipeWarnings(recipe)).toEqual([expect.stringContaining(words)]);
  });
});
