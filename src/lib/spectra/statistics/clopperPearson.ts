import { betaQuantile } from './quantiles';

export interface ExactInterval {
  readonly low: number;
  readonly high: number;
}

/**
 * Exact two-sided interval for an error rate after k failures in n independent trials
 * (Clopper & Pearson, Biometrika 26:404, 1934), from beta quantiles. Trials must be independent: replicates
 * of one lot count once.
 * @param confidence e.g. 0.95
 */
export function clopperPearson(failures: number, trials: number, confidence: number): ExactInterval {
  assertCounts(failures, trials, confidence);
  const tail = (1 - confidence) / 2;
  return {
    low: failures === 0 ? 0 : betaQuantile(tail, failures, trials - failures + 1),
    high: failures === trials ? 1 : betaQuantile(1 - tail, failures + 1, trials - failures)
  };
}

/** Exact one-sided upper bound: "at most this rate, with this confidence". */
export function clopperPearsonUpper(failures: number, trials: number, confidence: number): number {
  assertCounts(failures, trials, confidence);
  if (failures === trials) return 1;
  // With no failure the beta quantile has a closed form, good to the last digits.
  if (failures === 0) return -Math.expm1(Math.log1p(-confidence) / trials);
  return betaQuantile(confidence, failures + 1, trials - failures);
}

function assertCounts(failures: number, trials: number, confidence: number): void {
  if (
    !Number.isInteger(failures) ||
    !Number.isInteger(trials) ||
    failures < 0 ||
    trials < 1 ||
    failures > trials
  ) {
    throw new RangeError(`There cannot be ${failures} failures in ${trials} trials.`);
  }
  if (!(confidence > 0 && confidence < 1)) {
    throw new RangeError(`A confidence lies between 0 and 1; this one is ${confidence}.`);
  }
}
