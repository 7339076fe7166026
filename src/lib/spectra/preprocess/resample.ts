import { z } from 'zod';
import { numberOption } from './option';
import { StepRefusal, type PreprocessStep } from './step';

/**
 * Puts a spectrum on the uniform grid fromCm1, fromCm1 + stepCm1, … toCm1 (both ends included).
 *
 * One rule, chosen once for the whole spectrum: where the input has on average at least two points per grid cell,
 * each grid value is the mean over its cell (half a step on either side) of the straight lines that join the
 * points, so that noise is averaged instead of points dropped; otherwise it is read off those straight lines. Both
 * keep a straight line exact, and a spectrum that is already on the grid comes back as it was. Splines are not
 * used: they overshoot beside narrow bands. Nothing is extrapolated; at the ends of the input a cell shrinks
 * evenly on both sides to what was measured.
 *
 * Worked example: 0 10 20 30 at 100.0 100.5 101.0 101.5, grid step 1 from 100.5 to 101: the cell of 100.5 runs from
 * 100 to 101 and holds the mean of a straight line from 0 to 20, so 10.
 */
const options = z
  .strictObject({
    fromCm1: numberOption({
      title: 'From, cm-1',
      description:
        'First point of the grid. Below 300 cm-1 the laser line makes baselines bend and matches false.',
      min: -4000,
      max: 4000
    }),
    toCm1: numberOption({
      title: 'To, cm-1',
      description: 'Last point of the grid; a whole number of steps above the first.',
      min: -4000,
      max: 4500
    }),
    stepCm1: numberOption({
      title: 'Step, cm-1',
      description: 'Distance between grid points. Larger steps are quicker and coarser.',
      min: 0.1,
      max: 10
    })
  })
  .superRefine(({ fromCm1, toCm1, stepCm1 }, context) => {
    const steps = (toCm1 - fromCm1) / stepCm1;
    if (Math.abs(steps - Math.round(steps)) > 1e-6) {
      context.addIssue({
        code: 'custom',
        path: ['toCm1'],
        message: 'To, cm-1: lies a whole number of steps above From.'
      });
    } else if (Math.round(steps) + 1 < MIN_GRID || Math.round(steps) + 1 > MAX_GRID) {
      const message = `The grid has ${Math.max(0, Math.round(steps) + 1)} points; it may have ${MIN_GRID} to ${MAX_GRID}.`;
      context.addIssue({ code: 'custom', path: ['stepCm1'], message });
    }
  });

type ResampleOptions = z.output<typeof options>;

const MIN_GRID = 16;
const MAX_GRID = 20_000;
/** From this many input points per grid cell on, cells are averaged. */
const POINTS_PER_CELL = 2;

export const resample: PreprocessStep<'resample', typeof options> = {
  name: 'resample',
  version: 1,
  kind: 'grid',
  title: 'Put on a uniform grid',
  source: 'Linear interpolation, or the mean of it over each cell where the input is finer',
  options,
  defaults: { fromCm1: 300, toCm1: 1800, stepCm1: 1 },
  apply({ shiftCm1, intensity }, grid) {
    const gridCm1 = resampleGrid(grid);
    const last = shiftCm1.length - 1;
    if (!(shiftCm1[0] <= gridCm1[0] && shiftCm1[last] >= gridCm1[gridCm1.length - 1])) {
      throw new StepRefusal(
        'outside-axis',
        `The spectrum covers ${shiftCm1[0].toFixed(1)} to ${shiftCm1[last].toFixed(1)} cm-1; ` +
          `the method needs ${grid.fromCm1} to ${grid.toCm1} cm-1.`
      );
    }
    const spacing = (shiftCm1[last] - shiftCm1[0]) / last;
    const finer = spacing * POINTS_PER_CELL <= grid.stepCm1;
    const read = finer ? meanOverCells : interpolate;
    return { shiftCm1: gridCm1, intensity: read(shiftCm1, intensity, gridCm1, grid.stepCm1) };
  }
};

/** The grid's points. Each is computed from the first, so that errors of the step do not add up. */
export function resampleGrid({ fromCm1, toCm1, stepCm1 }: ResampleOptions): Float64Array {
  const count = Math.round((toCm1 - fromCm1) / stepCm1) + 1;
  const grid = new Float64Array(count);
  for (let i = 0; i < count; i++) grid[i] = fromCm1 + i * stepCm1;
  // The rounding of the last step must not put the last point above the limit that was asked for.
  grid[count - 1] = toCm1;
  return grid;
}

function interpolate(x: Float64Array, y: Float64Array, grid: Float64Array): Float64Array {
  const out = new Float64Array(grid.length);
  const lastInterval = x.length - 2;
  let j = 0;
  for (let i = 0; i < grid.length; i++) {
    const at = grid[i];
    while (j < lastInterval && x[j + 1] <= at) j++;
    out[i] = valueAt(x, y, j, at);
  }
  return out;
}

function meanOverCells(x: Float64Array, y: Float64Array, grid: Float64Array, stepCm1: number): Float64Array {
  const out = new Float64Array(grid.length);
  const lastInterval = x.length - 2;
  let j = 0;
  for (let i = 0; i < grid.length; i++) {
    const at = grid[i];
    const half = Math.min(stepCm1 / 2, at - x[0], x[lastInterval + 1] - at);
    const from = at - half;
    const to = at + half;
    while (j < lastInterval && x[j + 1] <= from) j++;
    if (!(to > from)) {
      while (j < lastInterval && x[j + 1] <= at) j++;
      out[i] = valueAt(x, y, j, at);
      continue;
    }
    // Trapezoids from `from` to `to`: exact for the joining lines. `k` walks, `j` stays: cells touch.
    let area = 0;
    let left = from;
    let leftValue = valueAt(x, y, j, from);
    for (let k = j; left < to; k++) {
      const inside = k < lastInterval && x[k + 1] < to;
      const right = inside ? x[k + 1] : to;
      const rightValue = inside ? y[k + 1] : valueAt(x, y, k, to);
      area += ((leftValue + rightValue) * (right - left)) / 2;
      left = right;
      leftValue = rightValue;
    }
    out[i] = area / (to - from);
  }
  return out;
}

/** Value at `at` on the line through points j and j+1; exactly y[j] or y[j+1] at the points themselves. */
function valueAt(x: Float64Array, y: Float64Array, j: number, at: number): number {
  if (at === x[j + 1]) return y[j + 1];
  return y[j] + (y[j + 1] - y[j]) * ((at - x[j]) / (x[j + 1] - x[j]));
}
