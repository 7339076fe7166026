import stdlibBeta from '@stdlib/stats-base-dists-beta-quantile';
import stdlibChiSquared from '@stdlib/stats-base-dists-chisquare-quantile';
import stdlibF from '@stdlib/stats-base-dists-f-quantile';
import stdlibNormal from '@stdlib/stats-base-dists-normal-quantile';
import stdlibT from '@stdlib/stats-base-dists-t-quantile';

/**
 * Quantiles of the distributions that limits and sample sizes rest on: the value not exceeded with
 * probability p. Computed by the stdlib packages (pure JavaScript, no engine's own log or power functions),
 * checked against independently computed tables. A question outside the domain is a bug of the caller and
 * throws: a NaN limit would let every comparison fail silently.
 */
export function normalQuantile(p: number): number {
  return defined(stdlibNormal(p, 0, 1), `normal quantile at p=${p}`);
}

export function chiSquaredQuantile(p: number, degrees: number): number {
  return defined(stdlibChiSquared(p, degrees), `chi-squared quantile at p=${p}, ${degrees} degrees`);
}

export function fQuantile(p: number, numerator: number, denominator: number): number {
  return defined(stdlibF(p, numerator, denominator), `F quantile at p=${p}, ${numerator} and ${denominator}`);
}

export function betaQuantile(p: number, alpha: number, beta: number): number {
  return defined(stdlibBeta(p, alpha, beta), `beta quantile at p=${p}, ${alpha} and ${beta}`);
}

export function tQuantile(p: number, degrees: number): number {
  return defined(stdlibT(p, degrees), `t quantile at p=${p}, ${degrees} degrees`);
}

function defined(value: number, what: string): number {
  if (!Number.isFinite(value)) throw new RangeError(`The ${what} does not exist.`);
  return value;
}
