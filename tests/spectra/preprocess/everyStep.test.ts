import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { DEFAULT_RECIPE } from '$lib/spectra/preprocess/recipe';
import { applyStep, applySteps, STEPS, stepSpec, type StepName } from '$lib/spectra/preprocess/steps';
import type { Spectrum } from '$lib/spectra/spectrum';
import '../../support/fixedSeed';
import { lorentzians } from '../../support/madeSpectra';
import { onUniformAxis, relativeDistance } from '../../support/preprocessCurve';

const spectrum = lorentzians(
  { from: 280, to: 1820, step: 1 },
  [
    { centreCm1: 500, height: 700, fwhmCm1: 9 },
    { centreCm1: 900, height: 1500, fwhmCm1: 14 },
    { centreCm1: 1000, height: 2000, fwhmCm1: 900 }
  ],
  { sd: 10, seed: 21 }
);
const reference = lorentzians(
  { from: 280, to: 1820, step: 1 },
  [
    { centreCm1: 500, height: 700, fwhmCm1: 9 },
    { centreCm1: 900, height: 1500, fwhmCm1: 14 }
  ],
  { sd: 0, seed: 1 }
);
const run = (name: StepName, input: Spectrum) => applyStep(input, stepSpec(name), { reference });
const NAMES = STEPS.map((step) => step.name);

describe.each(NAMES)('%s', (name) => {
  it('changes neither the spectrum it is given nor the reference, even when run twice', () => {
    const before = [spectrum, reference].map((s) => [[...s.shiftCm1], [...s.intensity]]);
    const first = run(name, spectrum);
    const again = run(name, spectrum);
    expect([spectrum, reference].map((s) => [[...s.shiftCm1], [...s.intensity]])).toEqual(before);
    expect(first.intensity).not.toBe(spectrum.intensity);
    expect(again.intensity).not.toBe(first.intensity);
  });

  it('gives the same bits again after other spectra, longer and shorter, went through the same work arrays', () => {
    const first = run(name, spectrum);
    const longer = onUniformAxis(
      Array.from({ length: 4001 }, (_, i) => 50 + ((i * 13) % 29)),
      0.5,
      0
    );
    const shorter = onUniformAxis(
      Array.from({ length: 400 }, (_, i) => 9 + ((i * 5) % 17)),
      4,
      290
    );
    for (const other of [longer, shorter]) {
      applyStep(other, stepSpec(name), {
        reference: { ...other, intensity: other.intensity.map((v, i) => v + (i % 3)) }
      });
    }
    const again = run(name, spectrum);
    expect([...again.shiftCm1]).toEqual([...first.shiftCm1]);
    expect(sameBits(again.intensity, first.intensity)).toBe(true);
  });
});

/** What a step makes of a spectrum scaled by s and raised by c: the same, scaled by s alone, or scaled and raised. */
const LAWS: Record<StepName, { readonly scale: boolean; readonly offset: boolean } | 'offset uncertain'> = {
  despike: { scale: true, offset: true },
  resample: { scale: true, offset: true },
  'keep-ranges': { scale: true, offset: true },
  'drop-ranges': { scale: true, offset: true },
  'asymmetric-least-squares': { scale: true, offset: false },
  airpls: 'offset uncertain',
  arpls: { scale: true, offset: false },
  'polynomial-baseline': { scale: true, offset: false },
  'savitzky-golay': { scale: true, offset: false },
  snv: { scale: false, offset: false },
  msc: { scale: false, offset: false },
  'unit-vector': 'offset uncertain'
};

describe('scale and offset', () => {
  const scale = fc.double({ min: 0.01, max: 1000, noNaN: true });
  const offset = fc.double({ min: -5000, max: 5000, noNaN: true });

  it.each(NAMES)('%s answers a scaled and raised spectrum by its law', (name) => {
    const law = LAWS[name];
    const plain = run(name, spectrum).intensity;
    fc.assert(
      fc.property(scale, offset, (s, c) => {
        const raise = law === 'offset uncertain' ? 0 : c;
        const changed = { ...spectrum, intensity: spectrum.intensity.map((value) => s * value + raise) };
        const scaled = law === 'offset uncertain' ? name !== 'unit-vector' : law.scale;
        const raised = law !== 'offset uncertain' && law.offset;
        const expected = plain.map((value) => (scaled ? s : 1) * value + (raised ? raise : 0));
        expect(relativeDistance(run(name, changed).intensity, expected)).toBeLessThan(1e-6);
      }),
      { numRuns: 25 }
    );
  });

  it('the whole default recipe does not see laser power or a constant background', () => {
    const plain = applySteps(spectrum, DEFAULT_RECIPE).intensity;
    fc.assert(
      fc.property(scale, offset, (s, c) => {
        const changed = { ...spectrum, intensity: spectrum.intensity.map((value) => s * value + c) };
        expect(relativeDistance(applySteps(changed, DEFAULT_RECIPE).intensity, plain)).toBeLessThan(1e-6);
      }),
      { numRuns: 25 }
    );
  });
});

function sameBits(a: Float64Array, b: Float64Array): boolean {
  const [left, right] = [a, b].map((values) => new BigUint64Array(values.slice().buffer));
  return left.length === right.length && left.every((bits, i) => bits === right[i]);
}
