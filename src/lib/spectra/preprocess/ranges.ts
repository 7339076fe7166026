import { z } from 'zod';
import { MIN_POINTS, type Spectrum } from '../spectrum';
import { numberOption } from './option';
import { StepRefusal, type PreprocessStep } from './step';

/**
 * Keeps, or drops, the points whose shift lies in any of the ranges, ends included: a liner's bands, a region
 * without bands. The axis gets a gap; later steps that look at neighbours run on each piece alone.
 */
const limit = (title: string) => numberOption({ title, description: 'Raman shift.', min: -4000, max: 4500 });

const range = z
  .strictObject({ fromCm1: limit('From, cm-1'), toCm1: limit('To, cm-1') })
  .refine(({ fromCm1, toCm1 }) => toCm1 > fromCm1, {
    path: ['toCm1'],
    message: 'To, cm-1: lies above From.'
  });

const options = z.strictObject({
  ranges: z
    .array(range)
    .min(1, 'Ranges: give at least one.')
    .max(20, 'Ranges: give at most 20.')
    .meta({ title: 'Ranges', description: 'Raman shift from and to, cm-1, ends included.' })
});

export type ShiftRange = z.output<typeof range>;

export const keepRanges: PreprocessStep<'keep-ranges', typeof options> = {
  name: 'keep-ranges',
  version: 1,
  kind: 'range',
  title: 'Keep ranges',
  source: 'Selection of variables; no numerical treatment',
  options,
  defaults: { ranges: [{ fromCm1: 300, toCm1: 1800 }] },
  apply: (spectrum, { ranges }) => select(spectrum, ranges, true)
};

export const dropRanges: PreprocessStep<'drop-ranges', typeof options> = {
  name: 'drop-ranges',
  version: 1,
  kind: 'range',
  title: 'Leave out ranges',
  source: 'Selection of variables; no numerical treatment',
  options,
  // The three strongest bands of a polyethylene liner in the identity region lie in these (1063, 1129; 1296; 1440-1460).
  defaults: {
    ranges: [
      { fromCm1: 1050, toCm1: 1140 },
      { fromCm1: 1285, toCm1: 1310 },
      { fromCm1: 1410, toCm1: 1475 }
    ]
  },
  apply: (spectrum, { ranges }) => select(spectrum, ranges, false)
};

function select(spectrum: Spectrum, ranges: readonly ShiftRange[], keep: boolean): Spectrum {
  const n = spectrum.shiftCm1.length;
  const shiftCm1 = new Float64Array(n);
  const intensity = new Float64Array(n);
  let count = 0;
  for (let i = 0; i < n; i++) {
    const at = spectrum.shiftCm1[i];
    if (ranges.some(({ fromCm1, toCm1 }) => at >= fromCm1 && at <= toCm1) !== keep) continue;
    shiftCm1[count] = at;
    intensity[count++] = spectrum.intensity[i];
  }
  if (count === 0)
    throw new StepRefusal('no-points-left', 'The ranges of the method leave no point of this spectrum.');
  if (count < MIN_POINTS) {
    const message = `The ranges of the method leave ${count} points of this spectrum; at least ${MIN_POINTS} are needed.`;
    throw new StepRefusal('too-few-points', message);
  }
  return { shiftCm1: shiftCm1.slice(0, count), intensity: intensity.slice(0, count) };
}
