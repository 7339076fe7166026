import { z } from 'zod';
import { medianInPlace } from './median';
import { numberOption, wholeOption } from './option';
import type { PreprocessStep } from './step';
import { workArray } from './workArray';

/**
 * Removes cosmic spikes: Whitaker & Hayes, Chemometrics and Intelligent Laboratory Systems 179:82 (2018).
 *
 * The first differences d get a modified z-score, z = 0.6745 (d - median) / MAD. A spike leaps up and back down
 * (or the reverse, a dead pixel) within a few points; the paper flags every |z| above the threshold. On a
 * spectrum with little noise that also flags the flanks of true bands, so two guards are added here:
 * both leaps must lie within `maxWidthPoints`, and each must be 3 times as steep as the slope just outside. A
 * band at least 2.5 points wide at half height cannot satisfy both, since its flank is steep over several points.
 * Flagged points become the mean of the unflagged ones within `window` points on either side.
 *
 * Worked example: 10 11 10 12 11 10 60 11 12 10 11 10 has differences of median -1 and MAD 2; those into and out
 * of the 60 score 17.2 and -16.2; with window 5 the 60 becomes (11+10+12+11+10+11+12+10+11+10)/10 = 10.8.
 *
 * The first and last points are left as they are: nothing tells a spike there from a band cut off by the axis.
 */
const options = z.strictObject({
  threshold: numberOption({
    title: 'Threshold, modified z-score',
    description: 'Larger values leave smaller spikes in.',
    min: 3,
    max: 50
  }),
  window: wholeOption({
    title: 'Fill window, points on either side',
    description: 'Larger values average more neighbours into the filled points.',
    min: 1,
    max: 25
  }),
  maxWidthPoints: wholeOption({
    title: 'Widest spike, points',
    description: 'Larger values remove wider spikes; must stay below the width of the narrowest true band.',
    min: 1,
    max: 6
  })
});

type DespikeOptions = z.output<typeof options>;

/** 0.75 quantile of the normal distribution: makes MAD / 0.6745 estimate a standard deviation. */
const NORMAL_QUARTILE = 0.6745;
/** Ratio of standard deviation to mean absolute deviation for a normal distribution, sqrt(pi / 2). */
const MEAN_DEVIATION_RATIO = 1.2533141373155003;
/** How much steeper than the slope outside it a leap must be. */
const STEEPER_THAN_OUTSIDE = 3;

const scratch = workArray();

export const despike: PreprocessStep<'despike', typeof options> = {
  name: 'despike',
  version: 1,
  kind: 'despike',
  title: 'Remove cosmic spikes',
  source: 'Whitaker & Hayes, Chemom. Intell. Lab. Syst. 179:82 (2018), with a width and a steepness guard',
  options,
  defaults: { threshold: 7, window: 5, maxWidthPoints: 3 },
  apply(spectrum, { threshold, window, maxWidthPoints }) {
    const spikes = findSpikes(spectrum.intensity, { threshold, maxWidthPoints });
    const intensity = spectrum.intensity.slice();
    if (spikes.length > 0) fillSpikes(spectrum.intensity, intensity, spikes, window);
    return { shiftCm1: spectrum.shiftCm1, intensity };
  }
};

/** Points `start` (inclusive) to `end` (exclusive) that a cosmic ray or a dead pixel has touched. */
export interface Spike {
  readonly start: number;
  readonly end: number;
}

/** Finds the spikes that `despike` would fill, in ascending order. Also tells a quality gate how many there are. */
export function findSpikes(
  intensity: Float64Array,
  { threshold, maxWidthPoints }: Pick<DespikeOptions, 'threshold' | 'maxWidthPoints'>
): Spike[] {
  const { median, sigma } = differenceScale(intensity);
  const spikes: Spike[] = [];
  if (!(sigma > 0)) return spikes;
  const limit = threshold * sigma;
  const last = intensity.length - 1;
  for (let start = 1; start < last; start++) {
    const leap = intensity[start] - intensity[start - 1];
    if (Math.abs(leap - median) <= limit) continue;
    for (let end = start + 1; end <= Math.min(start + maxWidthPoints, last); end++) {
      const back = intensity[end] - intensity[end - 1];
      if (Math.abs(back - median) <= limit || leap > 0 === back > 0) continue;
      if (
        Math.min(Math.abs(leap), Math.abs(back)) <
        STEEPER_THAN_OUTSIDE * slopeOutside(intensity, start, end)
      )
        continue;
      spikes.push({ start, end });
      start = end - 1;
      break;
    }
  }
  return spikes;
}

/** The larger step just outside the points start..end-1: a true band's flank goes on there. */
function slopeOutside(intensity: Float64Array, start: number, end: number): number {
  const before = start >= 2 ? Math.abs(intensity[start - 1] - intensity[start - 2]) : 0;
  const after = end + 1 < intensity.length ? Math.abs(intensity[end + 1] - intensity[end]) : 0;
  return Math.max(before, after);
}

/**
 * Median and robust standard deviation of the first differences. Where the median absolute deviation is zero (more
 * than half the differences equal, as in coarse counts) the mean absolute deviation stands in for it.
 */
export function differenceScale(intensity: Float64Array): { median: number; sigma: number } {
  const m = intensity.length - 1;
  if (m < 1) return { median: 0, sigma: 0 };
  const work = scratch(m);
  for (let i = 0; i < m; i++) work[i] = intensity[i + 1] - intensity[i];
  const median = medianInPlace(work, m);
  let sum = 0;
  for (let i = 0; i < m; i++) sum += work[i] = Math.abs(work[i] - median);
  const mad = medianInPlace(work, m);
  return { median, sigma: mad > 0 ? mad / NORMAL_QUARTILE : (sum / m) * MEAN_DEVIATION_RATIO };
}

/** Writes into `filled` the mean of the unflagged neighbours; reads only untouched values of `intensity`. */
function fillSpikes(
  intensity: Float64Array,
  filled: Float64Array,
  spikes: readonly Spike[],
  window: number
): void {
  const flagged = new Uint8Array(intensity.length);
  for (const { start, end } of spikes) flagged.fill(1, start, end);
  for (const { start, end } of spikes) {
    for (let i = start; i < end; i++) {
      // Spikes side by side can flag a whole small window: widen it until an unflagged point is met (the first
      // and last points never are flagged, so one is).
      let reach = window;
      let count = 0;
      let sum = 0;
      while (count === 0) {
        for (let j = Math.max(0, i - reach); j <= Math.min(intensity.length - 1, i + reach); j++) {
          if (flagged[j] === 1) continue;
          sum += intensity[j];
          count++;
        }
        reach++;
      }
      filled[i] = sum / count;
    }
  }
}
