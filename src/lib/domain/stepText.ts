import { findStep, type StepSpec } from '../spectra/preprocess/steps';

/** What a person calls a step of a recipe; the stored name where this version of the product has no such step. */
export const stepTitle = ({ name, version }: StepSpec): string =>
  findStep(name, version)?.title ?? name.replaceAll('-', ' ');

/**
 * A step of a recipe in words, each option by its title with the unit after the number:
 * `Savitzky-Golay filter: window 15 points, order of the polynomial 2, derivative 1`.
 */
export function stepText(spec: StepSpec): string {
  const titles = optionTitles(spec);
  // In the order of the step's form: the database keeps the names of stored options in an order of its own.
  const names = new Set([...titles.keys(), ...Object.keys(spec.options)]);
  const parts = [...names]
    .filter((name) => spec.options[name] !== undefined)
    .map((name) => {
      const value = spec.options[name];
      return Array.isArray(value)
        ? value.map(rangeText).join(', ')
        : optionText(titles.get(name) ?? name, value);
    });
  return parts.length === 0 ? stepTitle(spec) : `${stepTitle(spec)}: ${parts.join(', ')}`;
}

/** Titles of a step's options, by their stored names. */
function optionTitles({ name, version }: StepSpec): ReadonlyMap<string, string> {
  const options = findStep(name, version)?.options;
  const shape = options && 'shape' in options ? (options.shape as Readonly<Record<string, Titled>>) : {};
  return new Map(Object.entries(shape).map(([option, schema]) => [option, schema.meta()?.title ?? option]));
}

interface Titled {
  meta(): { readonly title?: string } | undefined;
}

/** What stands after the comma of a title is a unit, which follows the number, or a symbol, which does not. */
function optionText(title: string, value: unknown): string {
  const [, words, after] = /^(.*?)(?:, (.*))?$/.exec(title) ?? [];
  const name = words.charAt(0).toLowerCase() + words.slice(1);
  if (after === undefined) return `${name} ${String(value)}`;
  return /^(points|cm-1)/.test(after)
    ? `${name} ${String(value)} ${after}`
    : `${name} (${after}) ${String(value)}`;
}

function rangeText(range: unknown): string {
  const { fromCm1, toCm1 } = range as { readonly fromCm1: number; readonly toCm1: number };
  return `${fromCm1} to ${toCm1} cm-1`;
}
