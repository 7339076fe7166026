import { describe, expect, it } from 'vitest';
import { DEFAULT_RECIPE } from '$lib/spectra/preprocess/recipe';
import { applySteps, stepSpec, type StepName, type StepOptions } from '$lib/spectra/preprocess/steps';
import { rippledCurve } from '../../support/preprocessCurve';

/**
 * A stored decision must replay to the same bits, on every runtime and in every later build. These digests were
 * taken once from this code; one that differs means that a step's behaviour changed and needs a new version.
 */
const ripples = rippledCurve(0.5, 1600);
const curve = {
  ...ripples,
  intensity: ripples.intensity.map((value, i) => (i === 700 ? value + 3000 : value))
};
const grid = stepSpec('resample', { fromCm1: 420, toCm1: 1180, stepCm1: 1 });
const step = <Name extends StepName>(name: Name, options: Partial<StepOptions<Name>> = {}) => [
  grid,
  stepSpec(name, options)
];

describe('replay to the bit', () => {
  it.each([
    ['despike', [stepSpec('despike', { threshold: 4 }), grid], '1b4c21ff770faafb'],
    ['resample to a coarser grid', [grid], '5d888efec24e9544'],
    [
      'resample to a finer grid',
      [stepSpec('resample', { fromCm1: 420, toCm1: 1180, stepCm1: 0.2 })],
      '7f8da5d86d6a213b'
    ],
    ['asymmetric least squares', step('asymmetric-least-squares'), '28f0c13979a540ae'],
    ['airPLS', step('airpls'), '68b34facc43f86c3'],
    ['arPLS', step('arpls'), '356fb05f9dc8115c'],
    ['polynomial', step('polynomial-baseline'), '61808693506b4104'],
    ['smoothing', step('savitzky-golay', { derivative: 0, order: 3 }), 'abd9243c285e438e'],
    [
      'second derivative',
      step('savitzky-golay', { derivative: 2, order: 4, window: 21 }),
      '79035f5abb9f775e'
    ],
    ['unit vector', step('unit-vector'), '09d3ae0ba3523917'],
    [
      'the default recipe',
      DEFAULT_RECIPE.map((spec) => (spec.name === 'resample' ? grid : spec)),
      '7b716aed3f5e3a22'
    ]
  ])('%s', (_, recipe, expected) => {
    expect(digest(applySteps(curve, recipe).intensity)).toBe(expected);
  });

  it('the digest notices one bit', () => {
    const values = Float64Array.of(1, 2, 3);
    expect(digest(values)).not.toBe(digest(Float64Array.of(1, 2 + 2 ** -51, 3)));
  });
});

/** FNV-1a, 64 bits, over the bytes of the numbers, least significant first. */
function digest(values: Float64Array): string {
  const view = new DataView(new ArrayBuffer(8));
  let hash = 0xcbf29ce484222325n;
  for (const value of values) {
    view.setFloat64(0, value, true);
    for (let i = 0; i < 8; i++) hash = BigInt.asUintN(64, (hash ^ BigInt(view.getUint8(i))) * 0x100000001b3n);
  }
  return hash.toString(16).padStart(16, '0');
}
