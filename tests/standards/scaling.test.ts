import { describe, expect, it } from 'vitest';
import { msc } from '$lib/spectra/preprocess/msc';
import { snv } from '$lib/spectra/preprocess/snv';
import { onUniformAxis } from '../support/preprocessCurve';

describe('standard normal variate, Barnes et al. 1989', () => {
  it('the worked example, divisor n - 1', () => {
    // Computed independently to six places.
    const expected = [-1.155493, -0.256776, 0.641941, 1.540658, 0.641941, -0.256776, -1.155493];
    const scaled = snv.apply(onUniformAxis([1, 2, 3, 4, 3, 2, 1]), {}, {}).intensity;
    expected.forEach((value, i) => expect(scaled[i]).toBeCloseTo(value, 6));
  });
});

describe('multiplicative scatter correction, Geladi et al. 1985', () => {
  it('the worked example: slope 2, intercept 1', () => {
    // Computed independently: x = 2.9 5.1 7 9.1 10.9 on 1 2 3 4 5.
    const reference = onUniformAxis([1, 2, 3, 4, 5]);
    const corrected = msc.apply(onUniformAxis([2.9, 5.1, 7, 9.1, 10.9]), {}, { reference }).intensity;
    [0.95, 2.05, 3, 4.05, 4.95].forEach((value, i) => expect(corrected[i]).toBeCloseTo(value, 12));
  });
});
