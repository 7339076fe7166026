import type { ReadProblem } from './format';

/** Where an axis stops going one way: the index of the first value that repeats the one before or turns back. */
export function firstTurn(x: Float64Array): number {
  const down = x.length > 1 && x[x.length - 1] < x[0];
  for (let i = 1; i < x.length; i++) if (x[i] === x[i - 1] || x[i] < x[i - 1] !== down) return i;
  return -1;
}

/** The refusal of an axis that repeats a value or turns back at `index`. */
export function turnProblem(x: Float64Array, index: number, line: number): ReadProblem {
  const message =
    x[index] === x[index - 1]
      ? `The axis value ${x[index]} stands there twice. Export the spectrum again.`
      : `The axis turns back at ${x[index]}. Export a single spectrum.`;
  return { code: 'spectrum-fault', line, message };
}
