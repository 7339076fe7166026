import { describe, expect, it } from 'vitest';
import { despike, differenceScale, findSpikes } from '$lib/spectra/preprocess/despike';
import { onUniformAxis } from '../support/preprocessCurve';

// Whitaker & Hayes, Chemom. Intell. Lab. Syst. 179:82 (2018): z = 0.6745 (d - median) / MAD of first differences.
// The example was computed independently to four places.
describe('modified z-score of first differences, the worked example', () => {
  const y = Float64Array.of(10, 11, 10, 12, 11, 10, 60, 11, 12, 10, 11, 10);

  it('median -1 and MAD 2', () => {
    const { median, sigma } = differenceScale(y);
    expect(median).toBe(-1);
    expect(sigma * 0.6745).toBeCloseTo(2, 12);
  });

  it('z-scores of every difference', () => {
    const { median, sigma } = differenceScale(y);
    const expected = [0.6745, 0, 1.0118, 0, 0, 17.1997, -16.188, 0.6745, -0.3372, 0.6745, 0];
    expected.forEach((z, i) => expect((y[i + 1] - y[i] - median) / sigma).toBeCloseTo(z, 3));
  });

  it('the spike at index 6 is found at thresholds 3.5, 6, 7 and 9, and at 20 it is not', () => {
    for (const threshold of [3.5, 6, 7, 9]) {
      expect(findSpikes(y, { threshold, maxWidthPoints: 3 })).toEqual([{ start: 6, end: 7 }]);
    }
    expect(findSpikes(y, { threshold: 20, maxWidthPoints: 3 })).toEqual([]);
  });

  it('the filled value is the mean of the unflagged neighbours', () => {
    const filled = despike.apply(onUniformAxis(y), despike.defaults, {}).intensity;
    expect(filled[6]).toBeCloseTo(10.8, 12);
    expect([...filled].filter((value, i) => value !== y[i])).toHaveLength(1);
  });
});
