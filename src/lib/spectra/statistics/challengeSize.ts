import { clopperPearsonUpper } from './clopperPearson';

/**
 * Smallest number of independent challenges with which, when at most `failures` of them go wrong, the error
 * rate is shown to be at most `rate` with the given confidence. Without failures this is
 * ceil(ln(1 - confidence) / ln(1 - rate)).
 */
export function challengeSize(rate: number, confidence: number, failures = 0): number {
  if (!(rate > 0 && rate < 1))
    throw new RangeError(`An error rate lies between 0 and 1; this one is ${rate}.`);
  const shows = (n: number) => clopperPearsonUpper(failures, n, confidence) <= rate;
  let enough = failures + 1;
  while (!shows(enough)) enough *= 2;
  let short = failures;
  while (enough - short > 1) {
    const middle = Math.floor((short + enough) / 2);
    if (shows(middle)) enough = middle;
    else short = middle;
  }
  return enough;
}

/** How far a challenge has come towards the rate it is to show. */
export interface ChallengeProgress {
  /** Upper bound of the error rate so far; 1 before the first challenge. */
  readonly upperBound: number;
  readonly reached: boolean;
  /** Further challenges needed if none of them fails, and if exactly one does. */
  readonly moreWithoutFailure: number;
  readonly moreWithOneFailure: number;
}

/** Where a challenge with `failures` in `trials` stands against a target rate. */
export function challengeProgress(
  failures: number,
  trials: number,
  rate: number,
  confidence: number
): ChallengeProgress {
  const upperBound = trials === 0 ? 1 : clopperPearsonUpper(failures, trials, confidence);
  return {
    upperBound,
    reached: upperBound <= rate,
    moreWithoutFailure: Math.max(0, challengeSize(rate, confidence, failures) - trials),
    moreWithOneFailure: Math.max(1, challengeSize(rate, confidence, failures + 1) - trials)
  };
}
