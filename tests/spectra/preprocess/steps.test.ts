import { describe, expect, it } from 'vitest';
import { DEFAULT_RECIPE, displayPart } from '$lib/spectra/preprocess/recipe';
import { StepRefusal } from '$lib/spectra/preprocess/step';
import { meanSpectrum, stepReferences } from '$lib/spectra/preprocess/stepReferences';
import {
  applySteps,
  applyStepsTraced,
  findStep,
  parseRecipe,
  STEPS,
  stepSpec,
  type StepSpec
} from '$lib/spectra/preprocess/steps';
import { checkSpectrum } from '$lib/spectra/spectrum';
import { lorentzians } from '../../support/madeSpectra';

const made = (seed: number, scale = 1) => {
  const spectrum = lorentzians(
    { from: 250, to: 1850, step: 1.3 },
    [
      { centreCm1: 650, height: 900, fwhmCm1: 9 },
      { centreCm1: 1090, height: 1500, fwhmCm1: 12 },
      { centreCm1: 1400, height: 400, fwhmCm1: 200 }
    ],
    { sd: 5, seed }
  );
  return { shiftCm1: spectrum.shiftCm1, intensity: spectrum.intensity.map((value) => 300 + scale * value) };
};

const faultsOf = (input: unknown) => {
  const read = parseRecipe(input);
  return read.ok ? [] : read.faults;
};

describe('the register of steps', () => {
  it('holds each name and version once, with a title, a source and defaults its own rules accept', () => {
    const keys = STEPS.map(({ name, version }) => `${name} ${version}`);
    expect(new Set(keys).size).toBe(keys.length);
    for (const step of STEPS) {
      expect(step.name).toMatch(/^[a-z]+(-[a-z]+)*$/);
      expect(step.title.length).toBeGreaterThan(5);
      expect(step.source.length).toBeGreaterThan(10);
      expect(step.options.parse(step.defaults)).toEqual(step.defaults);
      expect(findStep(step.name, step.version)).toBe(step);
    }
  });

  it('every numeric option says what it is called and what it does, for the form', () => {
    for (const step of STEPS) {
      for (const [key, option] of Object.entries(step.options.shape)) {
        expect(option.meta(), `${step.name} ${key}`).toMatchObject({
          title: expect.stringMatching(/\w/),
          description: expect.stringMatching(/\w/)
        });
      }
    }
  });

  it('a specification is the defaults with what was chosen laid over them', () => {
    expect(stepSpec('savitzky-golay', { window: 21 })).toEqual({
      name: 'savitzky-golay',
      version: 1,
      options: { window: 21, order: 2, derivative: 1 }
    });
  });
});

describe('reading a recipe', () => {
  it('the recipe a method starts from passes, also after a journey through JSON', () => {
    const read = parseRecipe(JSON.parse(JSON.stringify(DEFAULT_RECIPE)));
    expect(read).toEqual({ ok: true, recipe: DEFAULT_RECIPE });
  });

  it('needs exactly one resample step', () => {
    const grid = stepSpec('resample');
    expect(faultsOf([stepSpec('snv')])).toEqual([expect.stringContaining('this one has 0')]);
    expect(faultsOf([grid, grid])).toEqual([expect.stringContaining('this one has 2')]);
  });

  it('names the step and the option at fault, every one of them', () => {
    const faults = faultsOf([
      stepSpec('resample'),
      { ...stepSpec('savitzky-golay'), options: { window: 8, order: 2, derivative: 1 } },
      { ...stepSpec('asymmetric-least-squares'), options: { lambda: 1, asymmetry: 2, maxIterations: 50 } }
    ]);
    expect(faults).toEqual([
      expect.stringMatching(/^Step 2\. Savitzky-Golay filter: Window, points: give an odd number/),
      expect.stringMatching(/^Step 3\. .*lambda: give a number from 10 to 1,000,000,000\./),
      expect.stringMatching(/^Step 3\. .*Asymmetry, p: give a number from 0.00001 to 0.5/)
    ]);
  });

  it.each<[string, unknown]>([
    ['an unknown step', { name: 'sharpen', version: 1, options: {} }],
    ['an unknown version', { ...stepSpec('snv'), version: 99 }],
    ['an option too many', { ...stepSpec('snv'), options: { strength: 3 } }],
    ['an option missing', { ...stepSpec('despike'), options: { threshold: 7 } }],
    ['not a number', { ...stepSpec('airpls'), options: { lambda: NaN, maxIterations: 20 } }],
    ['a number as text', { ...stepSpec('airpls'), options: { lambda: '1e5', maxIterations: 20 } }],
    ['a field too many', { ...stepSpec('snv'), note: 'x' }],
    ['no step at all', null]
  ])('refuses %s', (_, step) => {
    expect(faultsOf([stepSpec('resample'), step]).length).toBeGreaterThan(0);
  });

  it('refuses what is no list, and a list too long', () => {
    expect(faultsOf('snv').length).toBeGreaterThan(0);
    expect(faultsOf([stepSpec('resample'), ...new Array<StepSpec>(20).fill(stepSpec('snv'))])).toHaveLength(
      1
    );
  });
});

describe('running a recipe', () => {
  it('the trace ends where the run ends, and starts each step where the one before ended', () => {
    const trace = applyStepsTraced(made(1), DEFAULT_RECIPE);
    expect(trace.map(({ step }) => step)).toEqual(DEFAULT_RECIPE);
    expect(trace.at(-1)?.spectrum).toEqual(applySteps(made(1), DEFAULT_RECIPE));
    trace.forEach(({ step, spectrum }, i) => {
      const from = i === 0 ? made(1) : trace[i - 1].spectrum;
      expect(applySteps(from, [step])).toEqual(spectrum);
      expect(checkSpectrum(spectrum)).toBeNull();
    });
  });

  it('the default ends on 300 to 1800 cm-1 in steps of 1, mean 0', () => {
    const { shiftCm1, intensity } = applySteps(made(1), DEFAULT_RECIPE);
    expect([shiftCm1.length, shiftCm1[0], shiftCm1[1500]]).toEqual([1501, 300, 1800]);
    expect(Math.abs(intensity.reduce((sum, value) => sum + value, 0))).toBeLessThan(1e-9);
  });

  it('an empty recipe gives the spectrum itself', () => {
    const spectrum = made(1);
    expect(applySteps(spectrum, [])).toBe(spectrum);
  });

  it('a faulty stored recipe is a bug and throws as one, not as a refusal of the spectrum', () => {
    const faulty = [{ name: 'snv', version: 99, options: {} }];
    expect(() => applySteps(made(1), faulty)).toThrow(/version 99/);
    const outOfBounds = [{ ...stepSpec('airpls'), options: { lambda: -1, maxIterations: 20 } }];
    expect(() => applySteps(made(1), outOfBounds)).toThrow();
    for (const recipe of [faulty, outOfBounds]) {
      expect(() => applySteps(made(1), recipe)).not.toThrow(StepRefusal);
    }
  });

  it('the display part keeps the shape: no derivative, no scaling', () => {
    expect(displayPart(DEFAULT_RECIPE).map(({ name }) => name)).toEqual([
      'despike',
      'resample',
      'asymmetric-least-squares'
    ]);
    const smoothing = stepSpec('savitzky-golay', { derivative: 0 });
    expect(displayPart([smoothing, stepSpec('unit-vector')])).toEqual([smoothing]);
  });
});

describe('steps that need the mean reference', () => {
  const recipe = [stepSpec('resample'), stepSpec('msc'), stepSpec('airpls'), stepSpec('msc')];
  const references = [made(1), made(2, 3), made(3, 0.4)];

  it('one mean for each such step, each at its own point of the recipe', () => {
    const means = stepReferences(references, recipe);
    expect(means).toHaveLength(2);
    const gridded = references.map((spectrum) => applySteps(spectrum, recipe.slice(0, 1)));
    expect(means[0]).toEqual(meanSpectrum(gridded));
    const corrected = references.map((spectrum) => applySteps(spectrum, recipe.slice(0, 3), means));
    expect(means[1]).toEqual(meanSpectrum(corrected));
    expect(stepReferences(references, DEFAULT_RECIPE)).toEqual([]);
  });

  it('running with the means takes scale and offset out; without them it is refused', () => {
    const means = stepReferences(references, recipe);
    const one = applySteps(made(5), recipe, means).intensity;
    const other = applySteps(made(5, 2.5), recipe, means).intensity;
    let apart = 0;
    for (let i = 0; i < one.length; i++) apart = Math.max(apart, Math.abs(one[i] - other[i]));
    expect(apart).toBeLessThan(1e-6 * Math.max(...one));
    expect(() => applySteps(made(5), recipe)).toThrow(expect.objectContaining({ code: 'no-reference' }));
    expect(() => applySteps(made(5), recipe, means.slice(0, 1))).toThrow(StepRefusal);
  });

  it('no mean is made of nothing, or of unlike lengths', () => {
    expect(() => meanSpectrum([])).toThrow(/no spectra/);
    const short = { shiftCm1: made(1).shiftCm1.slice(1), intensity: made(1).intensity.slice(1) };
    expect(() => meanSpectrum([made(1), short])).toThrow(/unequal length/);
  });
});
