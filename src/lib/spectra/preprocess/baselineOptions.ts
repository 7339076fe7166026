import { numberOption, wholeOption } from './option';

/** Smoothness of a Whittaker baseline. It acts on grid points: at half the step the same shape needs 16 times as much. */
export const lambdaOption = numberOption({
  title: 'Smoothness, lambda',
  description: 'Larger values make the baseline stiffer, so that it follows less of broad bands.',
  min: 10,
  max: 1e9
});

export const maxIterationsOption = wholeOption({
  title: 'Most rounds',
  description: 'The fit stops earlier once it has settled.',
  min: 1,
  max: 200
});
