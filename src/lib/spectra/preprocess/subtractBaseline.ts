import type { Spectrum } from '../spectrum';
import { uniformSegments } from './segments';
import { StepRefusal } from './step';
import { MIN_WHITTAKER_POINTS } from './whittaker';
import { workArray } from './workArray';

const shiftedValues = workArray();
const fitted = workArray();

/**
 * Subtracts a Whittaker-type baseline from each uniform segment of a spectrum: a baseline stretched over a gap
 * would treat points far apart as neighbours.
 *
 * The fit sees the segment less its first value. A second-order Whittaker smooth passes a constant through, so the
 * result is the same, but a large offset no longer costs digits and a constant spectrum gives exactly zero.
 * @param fit writes the baseline of `y` into `z` (at least as long); `offset` is what was taken off `y`
 * @throws StepRefusal `axis-not-uniform`, or `too-few-points` when a segment has fewer than 4 points
 */
export function subtractBaseline(
  { shiftCm1, intensity }: Spectrum,
  fit: (y: Float64Array, z: Float64Array, offset: number) => void
): Spectrum {
  const out = new Float64Array(intensity.length);
  for (const { start, end } of uniformSegments(shiftCm1).segments) {
    const n = end - start;
    if (n < MIN_WHITTAKER_POINTS) {
      throw new StepRefusal(
        'too-few-points',
        `Only ${n} points are left from ${shiftCm1[start].toFixed(1)} cm-1 to the next gap; a baseline needs ${MIN_WHITTAKER_POINTS}.`
      );
    }
    const offset = intensity[start];
    const y = shiftedValues(n).subarray(0, n);
    const z = fitted(n);
    for (let i = 0; i < n; i++) y[i] = intensity[start + i] - offset;
    fit(y, z, offset);
    for (let i = 0; i < n; i++) out[start + i] = y[i] - z[i];
  }
  return { shiftCm1, intensity: out };
}
