import { describe, expect, it } from 'vitest';
import { challengeProgress, challengeSize } from '$lib/spectra/statistics/challengeSize';
import { readTable, sharedPath } from '../support/sharedData';

describe('how many challenges show an error rate', () => {
  // Exact binomial (success-run) theorem, computed with scipy 1.17.1; 95 % confidence.
  it.each([
    [0.1, 0, 29],
    [0.05, 0, 59],
    [0.03, 0, 99],
    [0.02, 0, 149],
    [0.01, 0, 299],
    [0.005, 0, 598],
    [0.002, 0, 1497],
    [0.001, 0, 2995],
    [0.1, 1, 46],
    [0.05, 1, 93],
    [0.02, 1, 236],
    [0.01, 1, 473],
    [0.005, 1, 947],
    [0.001, 1, 4742],
    [0.01, 3, 773]
  ])('a rate of %d with %i failures takes %i', (rate, failures, n) => {
    expect(challengeSize(rate, 0.95, failures)).toBe(n);
  });

  it('agrees with every row of the whole table', () => {
    const path = sharedPath('standards/challenge_sample_sizes.csv');
    if (path === null) return;
    const rows = readTable(path);
    expect(rows.length).toBeGreaterThan(70);
    for (const row of rows) {
      const size = challengeSize(
        Number(row.max_error_rate),
        Number(row.confidence),
        Number(row.failures_allowed)
      );
      expect([row.max_error_rate, row.confidence, row.failures_allowed, size]).toEqual([
        row.max_error_rate,
        row.confidence,
        row.failures_allowed,
        Number(row.n)
      ]);
    }
  });

  it('equals ceil(ln(1 - C)/ln(1 - p)) without failures', () => {
    for (const rate of [0.2, 0.07, 0.013]) {
      expect(challengeSize(rate, 0.9)).toBe(Math.ceil(Math.log(0.1) / Math.log(1 - rate)));
    }
  });
});

describe('where a challenge stands', () => {
  it('says how many more are needed, with and without one more failure', () => {
    const progress = challengeProgress(0, 40, 0.05, 0.95);
    expect(progress.reached).toBe(false);
    expect(progress.moreWithoutFailure).toBe(59 - 40);
    expect(progress.moreWithOneFailure).toBe(93 - 40);
  });

  it('is reached at the published size and not one before', () => {
    expect(challengeProgress(0, 59, 0.05, 0.95)).toMatchObject({ reached: true, moreWithoutFailure: 0 });
    expect(challengeProgress(0, 58, 0.05, 0.95)).toMatchObject({ reached: false, moreWithoutFailure: 1 });
  });

  it('knows nothing before the first challenge', () => {
    expect(challengeProgress(0, 0, 0.05, 0.95)).toMatchObject({ upperBound: 1, reached: false });
  });
});
