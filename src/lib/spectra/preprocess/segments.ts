import { StepRefusal } from './step';

/** A run of neighbouring points, `start` inclusive, `end` exclusive, all one grid step apart. */
export interface Segment {
  readonly start: number;
  readonly end: number;
}

/** Largest departure of one spacing from the grid step, as a fraction of it: far above rounding, far below a pixel. */
const TOLERANCE = 1e-6;

/**
 * Splits an axis into uniform runs. After ranges were dropped the axis has gaps of two or more whole steps; a
 * filter or a baseline must not treat the points on either side of a gap as neighbours, so it runs on each
 * segment alone.
 * @throws StepRefusal `axis-not-uniform` when some spacing is not a whole number of steps: resample first.
 */
export function uniformSegments(shiftCm1: Float64Array): { stepCm1: number; segments: Segment[] } {
  const n = shiftCm1.length;
  if (n < 2) throw new StepRefusal('too-few-points', `The spectrum has ${n} points; at least 2 are needed.`);
  let stepCm1 = Infinity;
  let widest = 0;
  for (let i = 1; i < n; i++) {
    const spacing = shiftCm1[i] - shiftCm1[i - 1];
    if (spacing < stepCm1) stepCm1 = spacing;
    if (spacing > widest) widest = spacing;
  }
  const slack = stepCm1 * TOLERANCE;
  if (widest - stepCm1 <= slack) return { stepCm1, segments: [{ start: 0, end: n }] };
  const segments: Segment[] = [];
  let start = 0;
  for (let i = 1; i < n; i++) {
    const spacing = shiftCm1[i] - shiftCm1[i - 1];
    if (spacing - stepCm1 <= slack) continue;
    const steps = spacing / stepCm1;
    if (Math.abs(steps - Math.round(steps)) > TOLERANCE * steps) {
      throw new StepRefusal(
        'axis-not-uniform',
        `The points are not evenly spaced near ${shiftCm1[i].toFixed(1)} cm-1. Put the resample step before this one.`
      );
    }
    segments.push({ start, end: i });
    start = i;
  }
  segments.push({ start, end: n });
  return { stepCm1, segments };
}
