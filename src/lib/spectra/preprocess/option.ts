import { z } from 'zod';

/** Bounds and words of one numeric option of a step. */
interface NumberOption {
  /** What the option is called on the form, unit last, e.g. "Window, points". */
  readonly title: string;
  /** What a larger value does, in one sentence. */
  readonly description: string;
  readonly min: number;
  readonly max: number;
}

/** A number within bounds, whose refusal names the option and its bounds. Title and description reach the form. */
export function numberOption({ title, description, min, max }: NumberOption) {
  const message = `${title}: give a number from ${inWords(min)} to ${inWords(max)}.`;
  return z.number(message).min(min, message).max(max, message).meta({ title, description });
}

/** A whole number within bounds. */
export function wholeOption({ title, description, min, max }: NumberOption) {
  const message = `${title}: give a whole number from ${inWords(min)} to ${inWords(max)}.`;
  return z.int(message).min(min, message).max(max, message).meta({ title, description });
}

/** Thousands parted by commas; fractions as they are. */
function inWords(value: number): string {
  return Number.isInteger(value) ? String(value).replace(/\B(?=(\d{3})+$)/g, ',') : String(value);
}

/** A step without options: an empty object, nothing else. */
export const noOptions = z.strictObject({}, 'This step takes no options.');
