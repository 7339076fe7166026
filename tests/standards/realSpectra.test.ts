import { describe, expect, it } from 'vitest';
import { decide } from '$lib/identity/decide';
import type { Decision } from '$lib/identity/decision';
import { displayPart } from '$lib/spectra/preprocess/recipe';
import { applySteps, stepSpec } from '$lib/spectra/preprocess/steps';
import type { Spectrum } from '$lib/spectra/spectrum';
import { axisCorrections } from '../../scripts/evaluate/axisChecks';
import { figuresOf, type Figures } from '../../scripts/evaluate/figures';
import { leaveOneSourceOut } from '../../scripts/evaluate/folds';
import { reportLines } from '../../scripts/evaluate/report';
import { readSpectraFolder, type LabelledFile } from '../../scripts/evaluate/spectraFolder';
import { runTrials } from '../../scripts/evaluate/trials';
import { libraryOf, madeMethod, methodFrom, requestFor, type MadeMethod } from '../support/madeMethods';
import { seededNormal } from '../support/madeSpectra';
import { readTwoColumns, sharedPath } from '../support/sharedData';

/**
 * What the engine reaches on openly licensed real spectra (origin and licences: the README beside them), with methods
 * as the product suggests them. What was tuned on what: the default recipe was chosen on the polymers, solvents and
 * sugars (see `DEFAULT_RECIPE`); allowances for noise and for few lots were set on the demo's made spectra; laying a
 * scan over its reference and the search for an admixture were made with the calibration spectra and the sugars'
 * mixtures at hand, and the largest admixture let pass was lowered once so that a fifth of ribose is not; that bare
 * samples are compared up to 3200 cm-1, and that no agreement below 0.9 passes, was settled on the polymers. So none of
 * these sets is an independent trial of the engine as a whole; every spectrum decided here was left out of the method it was decided under, but for the sugars and the liner, of which there is one
 * measurement each, references being that one with fresh noise.
 */
const folder = (name: string): string | null => sharedPath(`spectra/${name}`);

function evaluated(files: readonly LabelledFile[], check?: string): Figures {
  const corrections = check === undefined ? undefined : axisCorrections(files, check);
  const figures = figuresOf(runTrials(leaveOneSourceOut(files), { corrections }));
  console.log(
    reportLines(figures)
      .filter((line) => !/^(not passed|best match)/.test(line))
      .join('\n')
  );
  return figures;
}

/** Bytes of a two-column file. */
function fileOf({ shiftCm1, intensity }: Spectrum): Uint8Array {
  const lines = Array.from(shiftCm1, (x, i) => `${x},${intensity[i]}`);
  return new TextEncoder().encode(`Raman shift (cm-1),Intensity\n${lines.join('\n')}\n`);
}

/** A measured spectrum with fresh noise of 0.4 % of its largest intensity, four times: references of one substance. */
function methodOf(name: string, spectrum: Spectrum): MadeMethod {
  const top = spectrum.intensity.reduce((most, value) => Math.max(most, value), 0);
  const references = [1, 2, 3, 4].map((k) => {
    const normal = seededNormal(100 * name.length + k);
    const intensity = spectrum.intensity.map((value) => value + 0.004 * top * normal());
    return { id: `${name} ${k}`, source: `lot ${k}`, spectrum: { shiftCm1: spectrum.shiftCm1, intensity } };
  });
  return methodFrom(name, references);
}

describe('polystyrene, calcite and silicon on instruments that gave no reference', () => {
  const path = folder('calibration');
  it.skipIf(path === null)(
    'none passes as another, and genuine ones fail less than once in twenty, axes corrected by polystyrene',
    () => {
      // Natural and synthetic calcite are one substance.
      const files = readSpectraFolder(path as string).files.map((file) =>
        file.material.startsWith('calcite') ? { ...file, material: 'calcite' } : file
      );
      expect(files).toHaveLength(28);
      const figures = evaluated(files, 'polystyrene');
      expect(figures.falseAccepts).toEqual([]);
      expect(figures.failedOwn?.rate).toBeLessThan(0.05);
      expect(figures.passedOwn?.rate).toBeGreaterThan(0.8);
      expect(figures.bestMatchOfAll?.rate).toBe(1);
    },
    60_000
  );
});

describe('neat solvents', () => {
  const path = folder('solvents');
  it.skipIf(path === null)('each of thirteen is told from every other', () => {
    const { files } = readSpectraFolder(path as string, true);
    expect(files).toHaveLength(13);
    const figures = evaluated(files);
    expect(figures.refusedOther).toMatchObject({ count: 156, of: 156 });
  });
});

describe('polymers after weeks in fresh water, under methods from clean ones or the reverse', () => {
  const path = folder('polymers');
  it.skipIf(path === null)(
    'the best match is right nine times in ten, the equal error rate below six in a hundred, and no stranger passes',
    () => {
      const { files } = readSpectraFolder(path as string);
      expect(files).toHaveLength(75);
      const figures = evaluated(files);
      // 69 of 75; four of the six others are SAN, of whose weathered spectra three are much more like ABS.
      expect(figures.bestMatchOfAll?.rate).toBeGreaterThan(0.9);
      expect(figures.equalErrorByLead).toBeLessThan(0.06);
      expect(figures.falseAccepts).toEqual([]);
    },
    120_000
  );
});

describe('sugars and their mixtures', () => {
  const path = folder('carbohydrates');
  const content = path === null ? { files: [], mixtures: [] } : readSpectraFolder(path);
  const pure = new Map(content.files.map((file) => [file.material, file.spectrum]));
  const methods = new Map([...pure].map(([name, spectrum]) => [name, methodOf(name, spectrum)]));
  const library = libraryOf([...methods.values()].map((made) => made.entry));
  const decideAs = (name: string, spectrum: Spectrum): Decision =>
    decide(requestFor(methods.get(name) as MadeMethod, library, fileOf(spectrum)));
  const main = (fractions: ReadonlyMap<string, number>) =>
    [...fractions].reduce((a, b) => (b[1] > a[1] ? b : a));

  it.skipIf(path === null)('each pure sugar passes as itself and fails as another', () => {
    expect(pure.size).toBe(3);
    for (const [truth, spectrum] of pure)
      for (const claimed of pure.keys())
        expect([truth, claimed, decideAs(claimed, spectrum).verdict]).toEqual([
          truth,
          claimed,
          claimed === truth ? 'pass' : 'fail'
        ]);
  });

  it.skipIf(path === null)(
    'a mixture with a fifth or more of another sugar never passes as its main one',
    () => {
      const mixed = content.mixtures.filter(({ fractions }) => main(fractions)[1] <= 0.8);
      expect(mixed).toHaveLength(9);
      const verdicts = mixed.map(({ name, spectrum, fractions }) => {
        const { verdict, explanation } = decideAs(main(fractions)[0], spectrum);
        return `${name} ${verdict} by ${explanation.decidedBy}`;
      });
      console.log(verdicts.join('; '));
      expect(verdicts.filter((text) => text.includes(' pass '))).toEqual([]);
    }
  );

  it.skipIf(path === null)(
    'shares of the light come out within five percentage points of what went in',
    () => {
      // Shares are of light, as areas of baseline-corrected spectra; the published fractions are of the pure spectra's
      // own heights. Each pure spectrum's area turns one into the other.
      let worst = 0;
      for (const { spectrum, fractions } of content.mixtures) {
        const [claimed, largest] = main(fractions);
        if (largest > 0.8) continue;
        const { method } = methods.get(claimed) as MadeMethod;
        const area = (name: string) =>
          applySteps(pure.get(name) as Spectrum, displayPart(method.definition.recipe)).intensity.reduce(
            (sum, value) => sum + Math.max(0, value),
            0
          );
        const light = [...fractions].map(([name, fraction]) => [name, fraction * area(name)] as const);
        const all = light.reduce((sum, [, part]) => sum + part, 0);
        const { mixture } = decideAs(claimed, spectrum).explanation;
        for (const [name, part] of light) {
          if (name === claimed) continue;
          const found = mixture.find((entry) => entry.itemCode === name)?.share ?? 0;
          worst = Math.max(worst, Math.abs(found - part / all));
        }
      }
      console.log(`largest error of a share: ${(100 * worst).toFixed(1)} percentage points`);
      expect(worst).toBeLessThan(0.05);
    }
  );
});

describe('a bare polyethylene liner', () => {
  const path = folder('packaging/polyethylene_hdpe.csv');
  it.skipIf(path === null)('passes as none of the materials that come in it, as measured or smoothed', () => {
    const measured = readTwoColumns(path as string);
    // As measured it is faint (signal to noise below 15) and refused for that; a five-point mean is not.
    const smoothed = applySteps(measured, [
      stepSpec('resample', { fromCm1: 302, toCm1: 3101, stepCm1: 3 }),
      stepSpec('savitzky-golay', { window: 5, order: 1, derivative: 0 })
    ]);
    const polyethylene = methodOf('PE', smoothed);
    const names = ['LAC-M', 'SUC', 'MAN', 'MCC', 'STA', 'STE', 'MGS', 'MAC', 'GLY', 'PAR', 'CAC'];
    const made = names.map(madeMethod);
    const library = libraryOf([...made, polyethylene].map((each) => each.entry));
    expect(decide(requestFor(polyethylene, library, fileOf(smoothed))).verdict).toBe('pass');
    for (const method of made) {
      for (const liner of [measured, smoothed]) {
        const { verdict } = decide(requestFor(method, library, fileOf(liner)));
        expect([method.materialId, verdict]).not.toContain('pass');
      }
    }
  });
});
