import { z } from 'zod';
import { lambdaOption, maxIterationsOption } from './baselineOptions';
import { deterministicExp } from './deterministicExp';
import type { PreprocessStep } from './step';
import { subtractBaseline } from './subtractBaseline';
import { whittaker } from './whittaker';
import { workArray } from './workArray';

/**
 * Baseline by adaptive iteratively reweighted penalised least squares (airPLS): Zhang, Chen & Liang, Analyst
 * 135:1138 (2010), with second-order differences. After round t, with d = y - z and S = |sum of the negative d|:
 * points with d >= 0 weigh nothing, the others exp(t |d| / S), both end points exp(t max(negative d) / S). It stops
 * when S < 0.001 sum |y|, or after `maxIterations` rounds (the paper's limit is 20).
 *
 * The stop rule looks at |y| itself, so on a high background, such as strong fluorescence, it stops after fewer rounds
 * with the baseline still within the feet of strong bands. The other baselines do not: prefer them there.
 */
const options = z.strictObject({ lambda: lambdaOption, maxIterations: maxIterationsOption });

type AdaptiveOptions = z.output<typeof options>;

/** Share of the whole signal below which what still lies under the baseline no longer counts; from the paper. */
const NEGLIGIBLE = 0.001;

const weightsOf = workArray();

export const airpls: PreprocessStep<'airpls', typeof options> = {
  name: 'airpls',
  version: 1,
  kind: 'baseline',
  title: 'Baseline, adaptive reweighted (airPLS)',
  source: 'Zhang, Chen & Liang, Analyst 135:1138 (2010)',
  options,
  defaults: { lambda: 1e5, maxIterations: 20 },
  apply: (spectrum, chosen) =>
    subtractBaseline(spectrum, (y, z, offset) => void fitAdaptive(y, z, chosen, offset))
};

/**
 * Writes the baseline of `y` (n >= 4 evenly spaced values) into `baseline`.
 * @param offset what had been taken off every value of `y`; only the stop rule needs it
 * @returns rounds taken
 */
export function fitAdaptive(
  y: Float64Array,
  baseline: Float64Array,
  { lambda, maxIterations }: AdaptiveOptions,
  offset = 0
): number {
  const n = y.length;
  const weights = weightsOf(n).fill(1, 0, n);
  let total = 0;
  for (let i = 0; i < n; i++) total += Math.abs(y[i] + offset);
  for (let round = 1; ; round++) {
    whittaker(y, weights, lambda, baseline);
    let below = 0;
    let nearest = -Infinity;
    for (let i = 0; i < n; i++) {
      const d = y[i] - baseline[i];
      if (d >= 0) continue;
      below -= d;
      if (d > nearest) nearest = d;
    }
    if (round >= maxIterations || below < NEGLIGIBLE * total || below === 0) return round;
    const rate = round / below;
    for (let i = 0; i < n; i++) {
      const d = y[i] - baseline[i];
      weights[i] = d < 0 ? deterministicExp(-d * rate) : 0;
    }
    weights[0] = weights[n - 1] = deterministicExp(nearest * rate);
  }
}
