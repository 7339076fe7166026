import type { Spectrum } from '../spectrum';
import { isDerivative } from './recipe';
import { resample, resampleGrid } from './resample';
import { StepRefusal, type StepKind } from './step';
import { stepReferences } from './stepReferences';
import { applySteps, findStep, type StepSpec } from './steps';

/** Below this shift the laser line's skirt bends baselines: on real spectra the worst false match fell from 0.95 to 0.72. */
const LEAST_SAFE_SHIFT_CM1 = 300;

/**
 * What a method owner should know about a recipe that is lawful but unwise, or that would refuse every spectrum.
 * One plain sentence each; none for a sound recipe.
 * @param recipe as `parseRecipe` gives it
 */
export function recipeWarnings(recipe: readonly StepSpec[]): string[] {
  const kinds = recipe.map((spec) => findStep(spec.name, spec.version)?.kind);
  return [...orderWarnings(recipe, kinds), ...contentWarnings(recipe, kinds), ...trialWarnings(recipe)];
}

type Kinds = readonly (StepKind | undefined)[];

function orderWarnings(recipe: readonly StepSpec[], kinds: Kinds): string[] {
  const grid = kinds.indexOf('grid');
  const scaling = kinds.lastIndexOf('scaling');
  const derivative = recipe.findIndex(isDerivative);
  const baseline = kinds.lastIndexOf('baseline');
  const before = (kind: StepKind) => kinds.some((k, i) => k === kind && i < grid);
  const warnings: string[] = [];
  const warn = (applies: boolean, sentence: string) => void (applies && warnings.push(sentence));
  warn(
    kinds.lastIndexOf('despike') > grid,
    'Spikes are removed after the grid step, which has already spread them over their neighbours: remove them first.'
  );
  warn(
    before('filter') || before('baseline'),
    'A baseline or filter comes before the grid step: spectra whose points are not evenly spaced will be refused.'
  );
  warn(
    before('range'),
    'Ranges are chosen before the grid step, which bridges the gaps again with straight lines: choose them after it.'
  );
  warn(
    derivative >= 0 && baseline > derivative,
    'A baseline is fitted after a derivative: a derivative has no baseline to find. Put the baseline first.'
  );
  warn(
    scaling >= 0 && scaling < baseline,
    'Scaling comes before the baseline: the background then decides the scale. Put scaling last.'
  );
  warn(
    scaling >= 0 && scaling < derivative,
    'Scaling comes before the derivative, whose result is not scaled: put scaling last.'
  );
  return warnings;
}

function contentWarnings(recipe: readonly StepSpec[], kinds: Kinds): string[] {
  const count = (kind: StepKind) => kinds.filter((k) => k === kind).length;
  const from = Number(recipe.find((spec) => spec.name === resample.name)?.options.fromCm1);
  const warnings: string[] = [];
  if (count('scaling') === 0) {
    warnings.push('Nothing scales the spectra: laser power and focus will count as differences of material.');
  }
  if (count('baseline') > 1) {
    warnings.push('More than one baseline is subtracted: the later ones remove parts of true bands.');
  }
  if (count('baseline') === 0 && !recipe.some(isDerivative)) {
    warnings.push(
      'Neither a baseline nor a derivative is used: fluorescence will count as a difference of material.'
    );
  }
  if (recipe.filter(isDerivative).length > 1) {
    warnings.push('More than one derivative is taken: choose a higher derivative in one step instead.');
  }
  if (from < LEAST_SAFE_SHIFT_CM1) {
    warnings.push(
      `The grid starts at ${from} cm-1: below ${LEAST_SAFE_SHIFT_CM1} cm-1 the laser line bends baselines and makes other materials match.`
    );
  }
  return warnings;
}

/** Runs the recipe once on an even curve: what it refuses there (a window longer than a range), it refuses always. */
function trialWarnings(recipe: readonly StepSpec[]): string[] {
  const spec = recipe.find(({ name }) => name === resample.name);
  const grid = spec && resample.options.safeParse(spec.options);
  if (!grid?.success) return [];
  const shiftCm1 = resampleGrid(grid.data);
  // A parabola and a ripple: neither flat nor straight at any stage, whatever ranges are cut out of it.
  const intensity = shiftCm1.map((_, i) => 1000 + (i * i) / shiftCm1.length + (i % 7) + 3 * (i % 11));
  const trial: Spectrum = { shiftCm1, intensity };
  try {
    applySteps(trial, recipe, stepReferences([trial], recipe));
    return [];
  } catch (error) {
    if (!(error instanceof StepRefusal)) throw error;
    return [`This recipe refuses every spectrum. ${error.message}`];
  }
}
