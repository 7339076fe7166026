import { z } from 'zod';
import { lambdaOption, maxIterationsOption } from './baselineOptions';
import { deterministicExp } from './deterministicExp';
import { numberOption } from './option';
import type { PreprocessStep } from './step';
import { subtractBaseline } from './subtractBaseline';
import { whittaker } from './whittaker';
import { workArray } from './workArray';

/**
 * Baseline by asymmetrically reweighted penalised least squares (arPLS): Baek, Park, Ahn & Choo, Analyst 140:250
 * (2015), second-order differences. With d = y - z, m and s the mean and the standard deviation (divisor count - 1)
 * of the negative d, each point weighs 1 / (1 + exp(2 (d - (2 s - m)) / s)): full weight within the noise, none
 * well above it. It stops when |w - w'| / |w| (Euclidean) falls below `tolerance`.
 */
const options = z.strictObject({
  lambda: lambdaOption,
  tolerance: numberOption({
    title: 'Stop when weights change less than',
    description: 'Relative change of the weights; larger values stop earlier.',
    min: 1e-8,
    max: 0.1
  }),
  maxIterations: maxIterationsOption
});

type ReweightedOptions = z.output<typeof options>;

const weightsOf = workArray();

export const arpls: PreprocessStep<'arpls', typeof options> = {
  name: 'arpls',
  version: 1,
  kind: 'baseline',
  title: 'Baseline, asymmetrically reweighted (arPLS)',
  source: 'Baek, Park, Ahn & Choo, Analyst 140:250 (2015)',
  options,
  defaults: { lambda: 1e5, tolerance: 1e-3, maxIterations: 50 },
  apply: (spectrum, chosen) => subtractBaseline(spectrum, (y, z) => void fitReweighted(y, z, chosen))
};

/**
 * Writes the baseline of `y` (n >= 4 evenly spaced values) into `baseline`.
 * @returns rounds taken
 */
export function fitReweighted(
  y: Float64Array,
  baseline: Float64Array,
  { lambda, tolerance, maxIterations }: ReweightedOptions
): number {
  const n = y.length;
  const weights = weightsOf(n).fill(1, 0, n);
  for (let round = 1; ; round++) {
    whittaker(y, weights, lambda, baseline);
    if (round >= maxIterations) return round;
    const { mean, deviation } = negativeResiduals(y, baseline);
    // Fewer than two points below, or all equally far below: the paper's weights are undefined, the fit stands.
    if (!(deviation > 0)) return round;
    const middle = 2 * deviation - mean;
    const steepness = 2 / deviation;
    let change = 0;
    let size = 0;
    for (let i = 0; i < n; i++) {
      const weight = 1 / (1 + deterministicExp(steepness * (y[i] - baseline[i] - middle)));
      const old = weights[i];
      change += (weight - old) * (weight - old);
      size += old * old;
      weights[i] = weight;
    }
    if (change < tolerance * tolerance * size) return round;
  }
}

function negativeResiduals(y: Float64Array, baseline: Float64Array): { mean: number; deviation: number } {
  let count = 0;
  let sum = 0;
  for (let i = 0; i < y.length; i++) {
    const d = y[i] - baseline[i];
    if (d >= 0) continue;
    sum += d;
    count++;
  }
  if (count < 2) return { mean: 0, deviation: 0 };
  const mean = sum / count;
  let squares = 0;
  for (let i = 0; i < y.length; i++) {
    const d = y[i] - baseline[i];
    if (d < 0) squares += (d - mean) * (d - mean);
  }
  return { mean, deviation: Math.sqrt(squares / (count - 1)) };
}
