import { describe, expect, it } from 'vitest';
import { stepText, stepTitle } from '$lib/domain/stepText';
import { STEPS, stepSpec } from '$lib/spectra/preprocess/steps';

describe('a step of a recipe in words', () => {
  it('names each option by its title, the unit after the number', () => {
    expect(stepText(stepSpec('savitzky-golay'))).toBe(
      'Savitzky-Golay filter: window 15 points, order of the polynomial 2, derivative 1'
    );
    expect(stepText(stepSpec('resample', { stepCm1: 0.5 }))).toBe(
      'Put on a uniform grid: from 300 cm-1, to 1800 cm-1, step 0.5 cm-1'
    );
  });

  it('tells the options in the order of the form, in whatever order they were stored', () => {
    const stored = { name: 'resample', version: 1, options: { toCm1: 1800, stepCm1: 1, fromCm1: 300 } };
    expect(stepText(stored)).toBe(stepText(stepSpec('resample')));
  });

  it('sets a symbol in brackets before the number', () => {
    expect(stepText(stepSpec('asymmetric-least-squares'))).toBe(
      'Baseline, asymmetric least squares: smoothness (lambda) 100000, asymmetry (p) 0.01, most rounds 50'
    );
  });

  it('lists ranges from and to', () => {
    expect(stepText(stepSpec('keep-ranges', { ranges: [{ fromCm1: 300, toCm1: 1000 }] }))).toBe(
      'Keep ranges: 300 to 1000 cm-1'
    );
    expect(stepText(stepSpec('drop-ranges'))).toMatch(/^Leave out ranges: \d+ to \d+ cm-1, \d+ to /);
  });

  it('says nothing more of a step without options', () => {
    expect(stepText(stepSpec('snv'))).toBe('Standard normal variate');
  });

  it('shows no stored name of any step or option', () => {
    for (const step of STEPS) {
      const spec = stepSpec(step.name);
      expect(stepTitle(spec)).toBe(step.title);
      const text = stepText(spec);
      for (const option of Object.keys(spec.options))
        if (/[A-Z]/.test(option)) expect(text).not.toContain(option);
    }
  });

  it('still tells a step that this version does not know', () => {
    expect(stepText({ name: 'of-long-ago', version: 9, options: { depth: 2 } })).toBe('of long ago: depth 2');
  });
});
